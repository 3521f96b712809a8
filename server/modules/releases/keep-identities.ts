import type { EntityManager } from '@mikro-orm/core'
import canonicalize from 'canonicalize'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { Bus } from '../machines/bus.entity.ts'
import { DriveTrain } from '../machines/drive-train.entity.ts'
import { Family } from '../machines/family.entity.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'

interface Identity {
  key: string
  name: string
  retiredAt?: Date | null
}

/** Rows for what the release names; what it names no more is retired, what it names again comes back. */
function settle<T extends Identity>(rows: readonly T[], named: Record<string, { name: string }>, make: (key: string, name: string) => T, now: Date): Map<string, T> {
  const byKey = new Map(rows.map((r) => [r.key, r]))
  for (const row of rows) if (!Object.hasOwn(named, row.key)) row.retiredAt ??= now
  for (const [key, { name }] of Object.entries(named)) {
    const row = byKey.get(key)
    if (row) Object.assign(row, { name, retiredAt: null })
    else byKey.set(key, make(key, name))
  }
  return byKey
}

/** Buses, families, joints and drive trains of a machine as a release leaves them. @returns the joints by key */
export async function keepIdentities(em: EntityManager, machine: Machine, set: MachineSet, now: Date): Promise<Map<string, Joint>> {
  settle(await em.find(Bus, { machine }), set.buses, (key, name) => em.create(Bus, { machine, key, name, createdAt: now }), now)
  const families = settle(await em.find(Family, { machine }), set.families, (key, name) => em.create(Family, { machine, key, name, createdAt: now }), now)
  for (const [key, { driveTrain }] of Object.entries(set.families)) {
    const family = families.get(key)!
    const contentHash = sha256(canonicalize(driveTrain)!)
    const [last] = family.id ? await em.find(DriveTrain, { family }, { orderBy: { number: 'desc' }, limit: 1 }) : []
    if (last?.contentHash !== contentHash) em.create(DriveTrain, { family, number: (last?.number ?? 0) + 1, settings: driveTrain, contentHash, createdAt: now })
  }
  return settle(await em.find(Joint, { machine }), set.joints, (key, name) => em.create(Joint, { machine, key, name, createdAt: now }), now)
}
