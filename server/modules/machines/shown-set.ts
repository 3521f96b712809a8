import type { EntityManager } from '@mikro-orm/core'
import type { ShownRelease } from '../../../shared/contract/machines.ts'
import { emptySet, type MachineSet } from '../../../shared/parameters/machine-set.ts'
import { schemasFor, type SchemasFor } from '../firmware/schemas-for.ts'
import type { Release } from '../releases/release.entity.ts'
import { isWithdrawn, newestRelease } from './current-release.ts'
import type { Machine } from './machine.entity.ts'

/** What the pages of a machine show: the set of its newest release, withdrawn or not; an empty one before the first. */
export interface ShownSet {
  machine: Machine
  release: Release | null
  shown: ShownRelease | null
  set: MachineSet
}

export async function shownSet(em: EntityManager, machine: Machine): Promise<ShownSet> {
  const release = await newestRelease(em, machine)
  const shown = release && { version: release.version, sequence: release.sequence, withdrawn: await isWithdrawn(em, release) }
  return { machine, release, shown, set: release?.set ?? emptySet() }
}

export interface ShownWithSchemas extends ShownSet {
  firmware: SchemasFor
}

export async function shownWithSchemas(em: EntityManager, machine: Machine): Promise<ShownWithSchemas> {
  const shown = await shownSet(em, machine)
  return { ...shown, firmware: await schemasFor(em, shown.set) }
}
