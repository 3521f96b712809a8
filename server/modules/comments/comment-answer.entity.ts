import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from '../people/person.entity.ts'
import { Comment } from './comment.entity.ts'

/** A comment was marked answered. Immutable, and once for each. */
export const CommentAnswer = defineEntity({
  name: 'CommentAnswer',
  properties: {
    id: p.integer().primary(),
    comment: () => p.oneToOne(Comment).unique(),
    person: () => p.manyToOne(Person),
    personName: p.string().length(120),
    at: p.datetime(),
  },
})
export type CommentAnswer = InferEntity<typeof CommentAnswer>
