import type { EntityManager } from '@mikro-orm/core'
import type { BenchKeys, BenchKeyView } from '../../../shared/contract/bench-keys.ts'
import { currentRelease } from '../machines/current-release.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { BenchKey } from './bench-key.entity.ts'

export const presentKey = (key: BenchKey, now: Date): BenchKeyView => ({
  id: key.id,
  name: key.name,
  begins: key.begins,
  machines: key.machines,
  createdAt: key.createdAt.toISOString(),
  expiresAt: key.expiresAt.toISOString(),
  revokedAt: key.revokedAt?.toISOString() ?? null,
  lastUsedAt: key.lastUsedAt?.toISOString() ?? null,
  state: key.revokedAt ? 'revoked' : key.expiresAt <= now ? 'expired' : 'in use',
})

/** A person's own keys, newest first, and the machines that they may make keys for. */
export async function presentKeys(em: EntityManager, { person, held, now }: { person: Person; held: readonly HeldRole[]; now: Date }): Promise<BenchKeys> {
  const keys = await em.find(BenchKey, { person }, { orderBy: { id: 'desc' } })
  const machines = (await em.find(Machine, { retiredAt: null }, { orderBy: { name: 'asc' } })).filter((m) => may(held, 'record flashes', m.key).allowed)
  const reach: BenchKeys['machines'] = []
  for (const m of machines) {
    const release = await currentRelease(em, m)
    const [joint, settings] = Object.entries(release?.set.joints ?? {})[0] ?? []
    reach.push({ key: m.key, name: m.name, currentVersion: release?.version ?? null, joint: joint ?? null, serial: settings?.board ?? null })
  }
  return { keys: keys.map((k) => presentKey(k as BenchKey, now)), machines: reach }
}
