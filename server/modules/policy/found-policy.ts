import type { EntityManager } from '@mikro-orm/core'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { PolicyVersion } from './policy-version.entity.ts'

/** Version 1 of a new machine's policy: the defaults, in force at once, of nobody's making. Inside the act that makes the machine. */
export const foundPolicy = (em: EntityManager, machine: Machine, now: Date): PolicyVersion =>
  em.create(PolicyVersion, { machine, number: 1, content: defaultPolicy, reason: 'The defaults a machine begins with.', author: null, proposedAt: now, signedAt: now })
