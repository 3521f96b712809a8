import type { EntityManager } from '@mikro-orm/core'
import type { MailTopic } from '../../../shared/contract/mail.ts'
import type { Person } from '../people/person.entity.ts'
import { choiceOf } from './choices.ts'
import { nextDigest } from './digest.ts'
import { Mail } from './mail.entity.ts'

interface Letter {
  subject: string
  text: string
  /** what it is about: decides whether the receiver's choice is asked; one's account when absent, which always comes at once */
  topic?: MailTopic
  /** the single-use link as it stands in the text; shown masked outside demo mode */
  secretLink?: string
  now: Date
}

/** To a person at their address, or to an address of nobody yet. */
export type MailToQueue = Letter & ({ person: Person } | { to: string })

/**
 * Queues a mail in the transaction of the act it tells of; the sender delivers it after the transaction, or with the day's digest, as the
 * receiver chose.
 *
 * Line breaks of a subject become spaces: a subject is one header line.
 *
 * @returns null where the receiver wants no mail of this topic
 * @throws Error when the secret link does not stand in the text, where masking would miss it; or stands in a mail that could wait
 */
export function queueMail(em: EntityManager, mail: MailToQueue): Mail | null {
  const { topic = 'account' } = mail
  if (mail.secretLink !== undefined && !mail.text.includes(mail.secretLink)) throw new Error('the single-use link does not stand in the text of its mail')
  if (mail.secretLink !== undefined && topic !== 'account') throw new Error('a single-use link goes out in mails of one\'s account alone')
  const person = 'person' in mail ? mail.person : null
  const choice = person ? choiceOf(person, topic) : 'at once'
  if (choice === 'not') return null
  return em.create(Mail, {
    person,
    to: 'person' in mail ? mail.person.email : mail.to,
    subject: mail.subject.replaceAll(/[\r\n]+/g, ' ').slice(0, 200),
    text: mail.text,
    topic,
    secretLink: mail.secretLink ?? null,
    state: choice === 'daily digest' ? 'held' : 'queued',
    attempts: 0,
    createdAt: mail.now,
    nextAttemptAt: choice === 'daily digest' ? nextDigest(mail.now) : mail.now,
  })
}
