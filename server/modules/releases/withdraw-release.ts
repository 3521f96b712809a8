import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Person } from '../people/person.entity.ts'
import type { Release } from './release.entity.ts'
import { Withdrawal } from './withdrawal.entity.ts'

/** A release that must no longer be flashed, from now on and for good. */
export async function withdrawRelease(em: EntityManager, release: Release, { reason, person, now }: { reason: string; person: Person; now: Date }): Promise<void> {
  if (await em.count(Withdrawal, { release })) throw new DomainError('wrong-state', `${release.machine.name} ${release.version} is withdrawn already. Nothing was altered.`)
  em.create(Withdrawal, { release, person: em.getReference(Person, person.id), at: now, reason })
  await appendEntry(em, { at: now, person, act: 'release withdrawn', subject: { machine: release.machine.key, release: release.version }, details: { reason, sequence: release.sequence } })
}
