import type { EntityManager } from '@mikro-orm/core'
import type { CommentPlace, WriteComment } from '../../../shared/contract/comments.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { changeKey } from '../changes/locate.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import type { HeldRole } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'
import { Comment } from './comment.entity.ts'
import { CommentAnswer } from './comment-answer.entity.ts'
import { namedPeople } from './named-people.ts'
import { mayComment } from './permissions.ts'

export interface Writing {
  request: WriteComment
  /** the place in words */
  about: string
  person: Person
  held: readonly HeldRole[]
  baseUrl: string
  now: Date
}

/** The comment that another is to stand under: the first of its row, still open. */
async function headOf(em: EntityManager, change: Change, under: number): Promise<Comment> {
  const head = await em.findOne(Comment, { change, number: under })
  if (!head || head.under != null) throw new DomainError('content-invalid', `There is no comment ${under} that others stand under. Nothing was written; reload to see the comments.`, { fields: [{ pointer: '/under', detail: 'is no first comment of this change' }] })
  if ((await em.count(CommentAnswer, { comment: head })) > 0) throw new DomainError('wrong-state', `Comment ${under} is marked answered. Nothing was written; write a new comment.`)
  return head
}

const place = (head: Comment | null, request: WriteComment): CommentPlace => head?.place ?? request.on

/** Adds a comment to a change, and tells whom it names. */
export async function writeComment(em: EntityManager, change: Change, { request, about, person, held, baseUrl, now }: Writing): Promise<Comment> {
  const allowed = mayComment(change, held)
  if (!allowed.allowed) throw new DomainError('wrong-state', `${allowed.why} Nothing was written.`)
  const head = request.under === undefined ? null : await headOf(em, change, request.under)
  const named = (await namedPeople(em, request.text, change.machine.key)).filter((p) => p.id !== person.id)
  const [last] = await em.find(Comment, { change }, { orderBy: { number: 'desc' }, limit: 1 })
  const roles = [...new Set(held.filter((h) => h.machine === null || h.machine === change.machine.key).map((h) => h.role))].join(', ')
  const comment = em.create(Comment, {
    change, number: (last?.number ?? 0) + 1, person: em.getReference(Person, person.id), personName: person.name, roles, at: now,
    text: request.text.trim(), place: place(head, request), about: head?.about ?? about, named: named.map(({ id, name }) => ({ id, name })), under: head?.number ?? null,
  })
  await em.flush()
  const key = changeKey(change)
  await appendEntry(em, { at: now, person, act: 'comment written', subject: { machine: change.machine.key, change: key }, details: { comment: comment.number, ...(head ? { under: head.number } : {}), ...(comment.about ? { about: comment.about } : {}), text: comment.text, named: named.map((p) => p.name) } })
  for (const p of named)
    queueMail(em, { person: p, topic: 'named', subject: `You are named: ${change.machine.name} ${change.number}, ${change.title}`, text: `${person.name} names you in a comment on change ${key}, "${change.title}"${comment.about ? `, at ${comment.about}` : ''}:\n\n${comment.text}\n\n${baseUrl}/changes/${key}/review#comment-${comment.number}\n`, now })
  return comment
}
