import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from '../person.entity.ts'

/** A code that stands in for the second factor, once. Only its hash is kept. */
export const RecoveryCode = defineEntity({
  name: 'RecoveryCode',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person),
    codeHash: p.string().length(64).unique(),
    createdAt: p.datetime(),
    usedAt: p.datetime().nullable(),
  },
})
export type RecoveryCode = InferEntity<typeof RecoveryCode>
