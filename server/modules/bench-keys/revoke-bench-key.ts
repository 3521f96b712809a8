import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { BenchKey, revoke } from './bench-key.entity.ts'

/** A person revokes one of their own keys; from then on it opens nothing. @throws DomainError not-found, wrong-state */
export async function revokeBenchKey(em: EntityManager, { id, person, now }: { id: string; person: Person; now: Date }): Promise<void> {
  const key = /^\d{1,9}$/.test(id) ? await em.findOne(BenchKey, { id: Number(id), person }) : null
  if (!key) throw new DomainError('not-found', 'You have no such bench key. Nothing was altered.')
  revoke(key, now)
  await appendEntry(em, { at: now, person, act: 'bench key revoked', subject: { person: person.name }, details: { key: key.id, name: key.name, begins: key.begins } })
}
