import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { SignatureMeaning } from '../../../shared/contract/reviews.ts'
import { Change } from '../changes/change.entity.ts'
import { Person } from '../people/person.entity.ts'

/** A person's signed statement on an exact content hash. Immutable; of an earlier round it is void. */
export const Signature = defineEntity({
  name: 'Signature',
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    round: p.integer(),
    meaning: p.string().$type<SignatureMeaning>(),
    statement: p.text(),
    person: () => p.manyToOne(Person),
    /** printed name at the time of signing */
    personName: p.string().length(120),
    at: p.datetime(),
    contentHash: p.string().length(64),
  },
})
export type Signature = InferEntity<typeof Signature>
