import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { Machine } from './machine.entity.ts'

export interface OnMachine extends Place {
  machine: string
  found: Machine
}

/** Nothing here tells a machine that does not exist from one that the person may not read. */
const nothingHere = () => new DomainError('not-found', 'There is nothing at this address that you may read. Check the address, or ask an administrator for a role on the machine.')

/**
 * The machine that a path names as `:machine`.
 *
 * @throws DomainError not-found
 */
export async function onMachine(em: EntityManager, params: Record<string, string>): Promise<OnMachine> {
  const found = await em.findOne(Machine, { key: params.machine })
  if (!found) throw nothingHere()
  return { machine: found.key, subject: { machine: found.key }, found }
}
