import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from '../people/person.entity.ts'

export type MailState = 'queued' | 'sent' | 'failed'

/** A mail to send: written in the transaction of the act it tells of, sent afterwards. */
export const Mail = defineEntity({
  name: 'Mail',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person).nullable(),
    to: p.string().length(254),
    subject: p.string().length(200),
    text: p.text(),
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
