import type { EntityManager } from '@mikro-orm/core'
import { same } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { DriveTrain } from './drive-train.entity.ts'
import type { Machine } from './machine.entity.ts'

/** The released drive trains of each family of a machine, newest number first, by family key. */
export async function driveTrainsOf(em: EntityManager, machine: Machine): Promise<Map<string, DriveTrain[]>> {
  const rows = await em.find(DriveTrain, { family: { machine } }, { populate: ['family'], orderBy: { number: 'desc' } })
  const byFamily = new Map<string, DriveTrain[]>()
  for (const row of rows) byFamily.set(row.family.key, [...(byFamily.get(row.family.key) ?? []), row])
  return byFamily
}

/** The number under which a family's drive train, as the set has it, was released; null when it was not. */
export const driveTrainNumber = (set: MachineSet, family: string, released: ReadonlyMap<string, DriveTrain[]>): number | null =>
  released.get(family)?.find((d) => same(d.settings, set.families[family]?.driveTrain))?.number ?? null
