import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { CommentPlace } from '../../../shared/contract/comments.ts'
import { Change } from '../changes/change.entity.ts'
import { Person } from '../people/person.entity.ts'

/** What somebody wrote to a change, or to one place of it. Immutable: a later word is a comment of its own. */
export const Comment = defineEntity({
  name: 'Comment',
  uniques: [{ properties: ['change', 'number'] }],
  properties: {
    id: p.integer().primary(),
    change: () => p.manyToOne(Change),
    /** counted within the change */
    number: p.integer(),
    person: () => p.manyToOne(Person),
    /** printed name and roles on the machine at the time of writing */
    personName: p.string().length(120),
    roles: p.string().length(200),
    at: p.datetime(),
    text: p.text(),
    place: p.json<CommentPlace>(),
    /** the place in words, as it was */
    about: p.string().length(300),
    /** people it names */
    named: p.json<{ id: number; name: string }[]>(),
    /** number of the comment it stands under */
    under: p.integer().nullable(),
  },
})
export type Comment = InferEntity<typeof Comment>
