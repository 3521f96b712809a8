import type { EntityManager } from '@mikro-orm/core'
import type { CommentsView, CommentView, NamedView } from '../../../shared/contract/comments.ts'
import { Change } from '../changes/change.entity.ts'
import { changeKey } from '../changes/locate.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { CommentAnswer } from './comment-answer.entity.ts'
import { Comment } from './comment.entity.ts'
import { mayComment, mayMarkAnswered } from './permissions.ts'

/** Every comment of a change, oldest first. */
export async function presentComments(em: EntityManager, change: Change, person: Person, held: readonly HeldRole[]): Promise<CommentsView> {
  const comments = await em.find(Comment, { change }, { orderBy: { number: 'asc' } })
  const answers = new Map((await em.find(CommentAnswer, { comment: { change } })).map((a) => [a.comment.id, a]))
  return {
    comments: comments.map((c): CommentView => {
      const answer = answers.get(c.id)
      return {
        number: c.number,
        by: c.personName,
        roles: c.roles,
        at: c.at.toISOString(),
        text: c.text,
        on: c.place,
        about: c.about,
        named: c.named.map((n) => n.name),
        under: c.under ?? null,
        answered: answer ? { by: answer.personName, at: answer.at.toISOString() } : null,
        may: { answer: mayMarkAnswered(c, answer !== undefined, { change, person, held }) },
      }
    }),
    open: comments.filter((c) => c.under == null && !answers.has(c.id)).length,
    may: { write: mayComment(change, held) },
  }
}

/** Open comments of changes under way that name this person and have no word of theirs after; the longest waiting first. */
export async function presentNaming(em: EntityManager, person: Person, held: readonly HeldRole[]): Promise<NamedView[]> {
  const underWay = await em.find(Change, { state: { $in: ['draft', 'submitted', 'approved'] } }, { populate: ['machine'], fields: ['id', 'number', 'title', 'machine.key', 'machine.name'] })
  const readable = new Map(underWay.filter((c) => may(held, 'read', c.machine.key).allowed).map((c) => [c.id, c]))
  const comments = await em.find(Comment, { change: { $in: [...readable.keys()] } }, { orderBy: { id: 'asc' } })
  const answered = new Set((await em.find(CommentAnswer, { comment: { change: { $in: [...readable.keys()] } } }, { populate: ['comment'] })).map((a) => `${a.comment.change.id} ${a.comment.number}`))
  const headOf = (c: Comment) => `${c.change.id} ${c.under ?? c.number}`
  return comments
    .filter((c) => c.named.some((n) => n.id === person.id) && !answered.has(headOf(c)) && !comments.some((o) => o.id > c.id && o.person.id === person.id && headOf(o) === headOf(c)))
    .map((c): NamedView => {
      const change = readable.get(c.change.id)!
      return { change: changeKey(change as unknown as Change), changeTitle: change.title, machineName: change.machine.name, changeNumber: change.number, comment: c.number, by: c.personName, at: c.at.toISOString(), text: c.text, about: c.about }
    })
}
