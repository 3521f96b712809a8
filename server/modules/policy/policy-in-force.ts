import type { EntityManager } from '@mikro-orm/core'
import type { Machine } from '../machines/machine.entity.ts'
import { PolicyVersion } from './policy-version.entity.ts'

/**
 * The policy of a machine that holds now: the signed version with the highest number.
 *
 * @throws Error when the machine was made without one
 */
export async function policyInForce(em: EntityManager, machine: Machine): Promise<PolicyVersion> {
  const [version] = await em.find(PolicyVersion, { machine, signedAt: { $ne: null } }, { orderBy: { number: 'desc' }, limit: 1 })
  if (!version) throw new Error(`${machine.key} has no policy in force`)
  return version
}
