import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { ChangeEventKind } from '../../../shared/contract/changes.ts'
import { Person } from '../people/person.entity.ts'
import { Change } from './change.entity.ts'

/** One step in the life of a change: what the rail is drawn from. Immutable. */
export const ChangeEvent = defineEntity({
  name: 'ChangeEvent',
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    kind: p.string().$type<ChangeEventKind>(),
    /** null when Detent itself did it (a stale check) */
    person: () => p.manyToOne(Person).nullable(),
    at: p.datetime(),
    note: p.text(),
  },
})
export type ChangeEvent = InferEntity<typeof ChangeEvent>
