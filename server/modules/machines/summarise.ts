import type { EntityManager } from '@mikro-orm/core'
import type { BusSummary, JointSummary, MachineSummary } from '../../../shared/contract/machines.ts'
import { effectiveValues } from '../../../shared/parameters/effective.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { Change } from '../changes/change.entity.ts'
import { presentSummaries } from '../changes/present.ts'
import { ReleaseJoint } from '../releases/release-joint.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import { busPlan } from './bus-plan.ts'
import type { ShownSet } from './shown-set.ts'
import { touchedBy } from './touched-by.ts'

export const summariseMachine = ({ machine, shown, set }: ShownSet, openChanges: number): MachineSummary => ({
  key: machine.key,
  name: machine.name,
  description: machine.description,
  retired: Boolean(machine.retiredAt),
  joints: Object.keys(set.joints).length,
  buses: Object.keys(set.buses).length,
  currentVersion: shown && !shown.withdrawn ? shown.version : null,
  openChanges,
})

export const summariseBuses = (set: MachineSet): BusSummary[] =>
  Object.entries(set.buses).map(([key, settings]) => {
    const { taps, doubled } = busPlan(set, key)
    return { key, settings, joints: taps.filter((t) => t.joint !== null).length, doubled }
  })

export interface Numbered {
  revision: number
  imageSha256: string
}

/** Revision number and image hash of each joint of a release, by joint key. The images and contents themselves stay where they are. */
export async function numberedJoints(em: EntityManager, release: Release | null): Promise<Map<string, Numbered>> {
  if (!release) return new Map()
  const rows = await em.find(ReleaseJoint, { release }, { populate: ['joint', 'revision'], fields: ['imageSha256', 'joint.key', 'revision.number'] })
  return new Map(rows.map((r) => [r.joint.key, { revision: r.revision.number, imageSha256: r.imageSha256 }]))
}

/** The open changes that touch each joint, by joint key. */
export async function waitingAt(em: EntityManager, open: readonly Change[]): Promise<Map<string, JointSummary['waiting']>> {
  const waiting = new Map<string, JointSummary['waiting']>()
  const summaries = await presentSummaries(em, open)
  open.forEach((change, i) => {
    for (const joint of touchedBy(change)) waiting.set(joint, [...(waiting.get(joint) ?? []), { change: summaries[i].key, state: summaries[i].life }])
  })
  return waiting
}

/** Control mode of a joint by its firmware's schema; null where the schema has no such parameter. */
function modeOf(set: MachineSet, joint: string, schema: ParameterSchema | undefined): string | null {
  const parameter = schema?.byRole.get('control.mode')
  const [mode] = parameter ? effectiveValues(set, joint, [parameter]) : []
  return mode ? String(mode.value) : null
}

export interface JointContext {
  set: MachineSet
  schemas: Readonly<Record<string, ParameterSchema>>
  numbered: ReadonlyMap<string, Numbered>
  waiting: ReadonlyMap<string, JointSummary['waiting']>
}

export function summariseJoint({ set, schemas, numbered, waiting }: JointContext, key: string): JointSummary {
  const joint = set.joints[key]
  return {
    key,
    name: joint.name,
    family: joint.family,
    familyName: set.families[joint.family]?.name ?? joint.family,
    bus: joint.bus,
    address: joint.address,
    firmware: joint.firmware,
    revision: numbered.get(key)?.revision ?? null,
    mode: modeOf(set, key, schemas[joint.firmware]),
    ownValues: Object.keys(joint.values).length,
    waiting: waiting.get(key) ?? [],
  }
}
