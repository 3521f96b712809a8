import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { changeKey } from '../changes/locate.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { HeldRole } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'
import { CommentAnswer } from './comment-answer.entity.ts'
import { Comment } from './comment.entity.ts'
import { mayMarkAnswered } from './permissions.ts'

/** Marks a comment, and what stands under it, as answered. */
export async function markAnswered(em: EntityManager, change: Change, number: number, { person, held, now }: { person: Person; held: readonly HeldRole[]; now: Date }): Promise<void> {
  const comment = await em.findOne(Comment, { change, number })
  if (!comment) throw new DomainError('not-found', `Change ${changeKey(change)} has no comment ${number}. Nothing was marked.`)
  const answered = (await em.count(CommentAnswer, { comment })) > 0
  const allowed = mayMarkAnswered(comment, answered, { change, person, held })
  if (!allowed.allowed) throw new DomainError(answered || comment.under != null ? 'wrong-state' : 'not-permitted', `${allowed.why} Nothing was marked.`)
  em.create(CommentAnswer, { comment, person: em.getReference(Person, person.id), personName: person.name, at: now })
  await em.flush()
  await appendEntry(em, { at: now, person, act: 'comment answered', subject: { machine: change.machine.key, change: changeKey(change) }, details: { comment: number, by: comment.personName } })
}
