import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Change } from '../changes/change.entity.ts'
import { Person } from '../people/person.entity.ts'

/** A row of a change's diff that a person has read as it stood: it holds for as long as the row says the same, through later rounds too. */
export const ReadMark = defineEntity({
  name: 'ReadMark',
  uniques: [{ properties: ['change', 'person', 'row', 'rowHash'] }],
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    person: () => p.manyToOne(Person),
    /** round in which it was read */
    round: p.integer(),
    row: p.string().length(200),
    rowHash: p.string().length(64),
    at: p.datetime(),
  },
})
export type ReadMark = InferEntity<typeof ReadMark>
