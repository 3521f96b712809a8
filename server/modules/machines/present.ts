import type { EntityManager } from '@mikro-orm/core'
import type { LedgerEntryView } from '../../../shared/contract/ledger.ts'
import type { MachineSummary, MachineView } from '../../../shared/contract/machines.ts'
import type { Allowed } from '../../../shared/contract/people.ts'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { Change } from '../changes/change.entity.ts'
import { presentSummaries } from '../changes/present.ts'
import { LedgerEntry } from '../ledger/ledger-entry.entity.ts'
import { presentEntry } from '../ledger/present.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { presentReleases } from '../releases/present.ts'
import type { Release } from '../releases/release.entity.ts'
import { driveTrainNumber, driveTrainsOf } from './drive-trains.ts'
import { Machine } from './machine.entity.ts'
import { openChanges, openStates } from './open-changes.ts'
import { shownSet, shownWithSchemas } from './shown-set.ts'
import { numberedJoints, summariseBuses, summariseJoint, summariseMachine, waitingAt } from './summarise.ts'

/** The machines that the person may read, retired ones last, by name. */
export async function presentMachines(em: EntityManager, held: readonly HeldRole[]): Promise<MachineSummary[]> {
  const machines = (await em.find(Machine, {})).filter((m) => may(held, 'read', m.key).allowed)
  const summaries: MachineSummary[] = []
  for (const machine of machines) summaries.push(summariseMachine(await shownSet(em, machine), await em.count(Change, { machine, state: { $in: openStates } })))
  return summaries.sort((a, b) => Number(a.retired) - Number(b.retired) || a.name.localeCompare(b.name, 'en'))
}

async function presentCurrent(em: EntityManager, release: Release): Promise<ReleaseSummary> {
  await em.populate(release, ['machine', 'releasedBy'])
  return (await presentReleases(em, [release]))[0]
}

const lastActsShown = 12

async function lastActs(em: EntityManager, machine: Machine): Promise<LedgerEntryView[]> {
  const entries = await em.find(LedgerEntry, { machineKey: machine.key }, { orderBy: { sequence: 'desc' }, limit: lastActsShown })
  return entries.map(presentEntry)
}

/** "Retired" is told before "not your role", so that nobody asks for a role in vain. */
function abilitiesOn(machine: Machine, held: readonly HeldRole[], open: readonly Change[]): MachineView['may'] {
  const retired: Allowed | null = machine.retiredAt ? { allowed: false, why: `${machine.name} is retired.` } : null
  const keeping = may(held, 'make machines', machine.key)
  const waits: Allowed = { allowed: false, why: `${open.length === 1 ? 'One change is' : `${open.length} changes are`} not released yet; release or cancel ${open.length === 1 ? 'it' : 'them'} first.` }
  return {
    draftChange: retired ?? may(held, 'draft changes', machine.key),
    describe: retired ?? keeping,
    retire: retired ?? (keeping.allowed && open.length > 0 ? waits : keeping),
  }
}

export async function presentMachine(em: EntityManager, machine: Machine, held: readonly HeldRole[]): Promise<MachineView> {
  const all = await shownWithSchemas(em, machine)
  const { release, shown, set, firmware } = all
  const open = await openChanges(em, machine)
  const context = { set, schemas: firmware.schemas, numbered: await numberedJoints(em, release), waiting: await waitingAt(em, open) }
  const driveTrains = await driveTrainsOf(em, machine)
  return {
    ...summariseMachine(all, open.length),
    shown,
    currentRelease: release && shown && !shown.withdrawn ? await presentCurrent(em, release) : null,
    busList: summariseBuses(set),
    familyList: Object.entries(set.families).map(([key, { name }]) => ({
      key,
      name,
      joints: Object.values(set.joints).filter((j) => j.family === key).length,
      driveTrainNumber: driveTrainNumber(set, key, driveTrains),
    })),
    jointList: Object.keys(set.joints).map((key) => summariseJoint(context, key)),
    changes: await presentSummaries(em, open),
    lastActs: await lastActs(em, machine),
    may: abilitiesOn(machine, held, open),
  }
}
