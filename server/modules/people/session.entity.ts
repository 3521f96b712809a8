import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from './person.entity.ts'

/** A server-side session; the id is kept hashed, so that a copy of the database opens no session. */
export const SessionRecord = defineEntity({
  name: 'SessionRecord',
  tableName: 'session',
  properties: {
    idHash: p.string().length(64).primary(),
    person: () => p.manyToOne(Person).nullable(),
    data: p.text(),
    createdAt: p.datetime(),
    seenAt: p.datetime(),
    expiresAt: p.datetime(),
  },
})
export type SessionRecord = InferEntity<typeof SessionRecord>
