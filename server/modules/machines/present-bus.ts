import type { EntityManager } from '@mikro-orm/core'
import type { BusView } from '../../../shared/contract/machines.ts'
import { DomainError } from '../../http/errors.ts'
import { busPlan, reservedRanges } from './bus-plan.ts'
import type { Machine } from './machine.entity.ts'
import { shownSet } from './shown-set.ts'

/** @throws DomainError not-found when the shown release has no such bus */
export async function presentBus(em: EntityManager, machine: Machine, key: string): Promise<BusView> {
  const { shown, set } = await shownSet(em, machine)
  if (!shown || !Object.hasOwn(set.buses, key)) throw new DomainError('not-found', `${machine.name} has no bus "${key}" in its newest release. Buses come with releases: look at the machine's page, or at its changes.`)
  return { machine: machine.key, machineName: machine.name, shown, key, settings: set.buses[key], ...busPlan(set, key), reserved: reservedRanges }
}
