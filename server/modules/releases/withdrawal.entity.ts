import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from '../people/person.entity.ts'
import { Release } from './release.entity.ts'

/** Why a release must no longer be flashed. Immutable: a withdrawn release never comes back. */
export const Withdrawal = defineEntity({
  name: 'Withdrawal',
  properties: {
    id: p.integer().primary(),
    release: () => p.oneToOne(Release).owner(true),
    person: () => p.manyToOne(Person),
    at: p.datetime(),
    reason: p.text(),
  },
})
export type Withdrawal = InferEntity<typeof Withdrawal>
