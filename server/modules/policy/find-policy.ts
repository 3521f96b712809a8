import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { onMachine, type OnMachine } from '../machines/locate.ts'
import { PolicyVersion } from './policy-version.entity.ts'

export interface OfPolicy extends OnMachine {
  version: PolicyVersion
}

/**
 * The version of a machine's policy that a path names as `:machine` and `:number`.
 *
 * @throws DomainError not-found
 */
export async function ofPolicy(em: EntityManager, params: Record<string, string>): Promise<OfPolicy> {
  const at = await onMachine(em, params)
  const number = /^[1-9]\d{0,8}$/.test(params.number) ? Number(params.number) : 0
  const version = await em.findOne(PolicyVersion, { machine: at.found, number }, { populate: ['author', 'signedBy', 'machine'] })
  if (!version) throw new DomainError('not-found', 'There is nothing at this address that you may read. Check the address, or ask an administrator for a role on the machine.')
  return { ...at, subject: { ...at.subject, policy: number }, version }
}

/** A version as the database holds it now: what an act decides on, inside its transaction. */
export const freshVersion = (em: EntityManager, { id }: PolicyVersion): Promise<PolicyVersion> =>
  em.findOneOrFail(PolicyVersion, { id }, { populate: ['author', 'signedBy', 'machine'], refresh: true })
