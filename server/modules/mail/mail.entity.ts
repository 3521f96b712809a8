import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { MailState, MailTopic } from '../../../shared/contract/mail.ts'
import { DomainError } from '../../http/errors.ts'
import { Person } from '../people/person.entity.ts'


/** A mail to send: written in the transaction of the act it tells of, sent afterwards. */
export const Mail = defineEntity({
  name: 'Mail',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person).nullable(),
    to: p.string().length(254),
    subject: p.string().length(200),
    text: p.text(),
    topic: p.string().$type<MailTopic>().default('account'),
    /** the single-use link in the text, shown masked outside demo mode */
    secretLink: p.string().nullable(),
    state: p.string().$type<MailState>(),
    attempts: p.integer().default(0),
    createdAt: p.datetime(),
    nextAttemptAt: p.datetime(),
    sentAt: p.datetime().nullable(),
    lastError: p.string().nullable(),
  },
})
export type Mail = InferEntity<typeof Mail>

/** After so many attempts a mail waits for an administrator. */
export const mostAttempts = 8
const firstWaitMs = 30_000
const longestWaitMs = 3600_000

export function markSent(mail: Mail, now: Date) {
  Object.assign(mail, { state: 'sent', attempts: mail.attempts + 1, sentAt: now, lastError: null })
}

/** Back to the queue with a longer wait each time; failed after the last attempt. */
export function markUndelivered(mail: Mail, error: string, now: Date) {
  mail.attempts += 1
  mail.lastError = error.slice(0, 500)
  if (mail.attempts >= mostAttempts) mail.state = 'failed'
  mail.nextAttemptAt = new Date(now.getTime() + Math.min(longestWaitMs, firstWaitMs * 2 ** (mail.attempts - 1)))
}

/** Sent again at once, with a full count of attempts before it. */
export function retry(mail: Mail, now: Date) {
  if (mail.state === 'sent') throw new DomainError('wrong-state', 'This mail was sent already. Nothing was altered; a new link or notice comes from the act that makes it.')
  if (mail.state === 'gathered') throw new DomainError('wrong-state', 'This mail went out in a digest. Nothing was altered; the digest stands in the list as a mail of its own.')
  Object.assign(mail, { state: 'queued', attempts: 0, nextAttemptAt: now })
}
