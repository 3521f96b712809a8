import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { Edit } from '../../../shared/parameters/edits.ts'
import { Person } from '../people/person.entity.ts'
import { Change } from './change.entity.ts'

/** A saved state of a draft that can be gone back to: every save is one. Immutable. */
export const DraftPoint = defineEntity({
  name: 'DraftPoint',
  uniques: [{ properties: ['change', 'number'] }],
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    number: p.integer(),
    by: () => p.manyToOne(Person),
    at: p.datetime(),
    text: p.text().lazy(true, false),
    /** what this save altered; empty when only comments or layout did */
    edits: p.json<Edit[]>(),
  },
})
export type DraftPoint = InferEntity<typeof DraftPoint>
