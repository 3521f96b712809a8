import type { EntityManager } from '@mikro-orm/core'
import type { ChangeState } from '../../../shared/contract/changes.ts'
import { Change } from '../changes/change.entity.ts'
import type { Machine } from './machine.entity.ts'

export const openStates: ChangeState[] = ['draft', 'submitted', 'approved']

/** Changes of a machine that are neither released nor cancelled, newest first. */
export const openChanges = (em: EntityManager, machine: Machine): Promise<Change[]> =>
  em.find(Change, { machine, state: { $in: openStates } }, { orderBy: { number: 'desc' }, populate: ['machine', 'author', 'baseRelease'] })
