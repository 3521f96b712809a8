import { randomBytes } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import { DomainError, type FieldProblem } from '../../http/errors.ts'
import { hashOf } from '../../http/session-store.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'
import { BenchKey } from './bench-key.entity.ts'

/** 256 random bits behind a beginning that a search of files for leaked secrets can find. */
export const newSecret = () => `detent-bench-${randomBytes(32).toString('base64url')}`
const shownCharacters = 18

export interface BenchKeyToMake {
  name: string
  machines: string[]
  days: number
  secret: string
  person: Person
  held: readonly HeldRole[]
  now: Date
}

/**
 * Makes a bench key for machines on which its maker may record flashes. Only the hash of the secret is kept.
 *
 * The maker's password was re-entered before.
 *
 * @throws DomainError invalid-request naming each machine that the maker may not record on, or that is retired
 */
export async function makeBenchKey(em: EntityManager, { name, machines, days, secret, person, held, now }: BenchKeyToMake): Promise<BenchKey> {
  const there = new Map((await em.find(Machine, { key: { $in: machines } })).map((m) => [m.key, m]))
  const fields = machines.flatMap((key, i): FieldProblem[] => {
    const machine = there.get(key)
    if (!machine || !may(held, 'record flashes', key).allowed) return [{ pointer: `/machines/${i}`, detail: `you may not record flashes on "${key}"` }]
    return machine.retiredAt ? [{ pointer: `/machines/${i}`, detail: `${machine.name} is retired` }] : []
  })
  if (fields.length > 0) throw new DomainError('invalid-request', 'A key reaches only machines on which its maker may record flashes. No key was made; leave out what is named.', { fields })
  const key = em.create(BenchKey, { person: em.getReference(Person, person.id), name: name.trim(), secretHash: hashOf(secret), begins: secret.slice(0, shownCharacters), machines, createdAt: now, expiresAt: new Date(now.getTime() + days * 86_400_000) })
  await em.flush()
  await appendEntry(em, { at: now, person, act: 'bench key made', subject: { person: person.name }, details: { key: key.id, name: key.name, begins: key.begins, machines, expiresAt: key.expiresAt.toISOString() } })
  return key
}
