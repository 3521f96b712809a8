import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { Person } from '../people/person.entity.ts'

/** A key for scripts on a bench computer: a builder's reading rights on some machines, and recording a flash. Only its hash is kept. */
export const BenchKey = defineEntity({
  name: 'BenchKey',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person).index(),
    name: p.string().length(80),
    /** SHA-256 of the secret: it has 256 random bits, so a slow hash would protect nothing more */
    secretHash: p.string().length(64).unique(),
    /** first characters of the secret, to tell keys apart */
    begins: p.string().length(24),
    /** keys of the machines it reaches */
    machines: p.json<string[]>(),
    createdAt: p.datetime(),
    expiresAt: p.datetime(),
    revokedAt: p.datetime().nullable(),
    lastUsedAt: p.datetime().nullable(),
  },
})
export type BenchKey = InferEntity<typeof BenchKey>

export const holds = (key: Pick<BenchKey, 'expiresAt' | 'revokedAt'>, now: Date) => !key.revokedAt && key.expiresAt > now

export function revoke(key: BenchKey, now: Date) {
  if (key.revokedAt) throw new DomainError('wrong-state', `Bench key "${key.name}" is revoked already. Nothing was altered.`)
  key.revokedAt = now
}
