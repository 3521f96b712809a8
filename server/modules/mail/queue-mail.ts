import type { EntityManager } from '@mikro-orm/core'
import type { Person } from '../people/person.entity.ts'
import { Mail } from './mail.entity.ts'

interface Letter {
  subject: string
  text: string
  /** the single-use link as it stands in the text; shown masked outside demo mode */
  secretLink?: string
  now: Date
}

/** To a person at their address, or to an address of nobody yet. */
export type MailToQueue = Letter & ({ person: Person } | { to: string })

/**
 * Queues a mail in the transaction of the act it tells of; the sender delivers it after the transaction.
 *
 * Line breaks of a subject become spaces: a subject is one header line.
 *
 * @throws Error when the secret link does not stand in the text, where masking would miss it
 */
export function queueMail(em: EntityManager, mail: MailToQueue): Mail {
  if (mail.secretLink !== undefined && !mail.text.includes(mail.secretLink)) throw new Error('the single-use link does not stand in the text of its mail')
  const person = 'person' in mail ? mail.person : null
  return em.create(Mail, {
    person,
    to: 'person' in mail ? mail.person.email : mail.to,
    subject: mail.subject.replaceAll(/[\r\n]+/g, ' ').slice(0, 200),
    text: mail.text,
    secretLink: mail.secretLink ?? null,
    state: 'queued',
    attempts: 0,
    createdAt: mail.now,
    nextAttemptAt: mail.now,
  })
}
