import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from './person.entity.ts'

/** A single-use, expiring link to set a password: an invitation or a reset. Only the hash of its secret is kept here. */
export const Link = defineEntity({
  name: 'Link',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person),
    kind: p.string().$type<'invitation' | 'reset'>(),
    secretHash: p.string().length(64).unique(),
    createdAt: p.datetime(),
    expiresAt: p.datetime(),
    usedAt: p.datetime().nullable(),
  },
})
export type Link = InferEntity<typeof Link>
