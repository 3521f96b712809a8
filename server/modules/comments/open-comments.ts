import type { EntityManager } from '@mikro-orm/core'
import type { Change } from '../changes/change.entity.ts'
import { CommentAnswer } from './comment-answer.entity.ts'
import { Comment } from './comment.entity.ts'

/** Comments of a change that nobody marked answered; those under another are open with it. */
export async function openComments(em: EntityManager, change: Change): Promise<Comment[]> {
  const answered = new Set((await em.find(CommentAnswer, { comment: { change } })).map((a) => a.comment.id))
  return (await em.find(Comment, { change, under: null }, { orderBy: { number: 'asc' } })).filter((c) => !answered.has(c.id))
}
