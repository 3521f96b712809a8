import type { MailView } from '../../../shared/contract/mail.ts'
import type { Config } from '../../config.ts'
import type { Mail } from './mail.entity.ts'
import { masked } from './mask.ts'

/** A mail as an administrator reads it: with its link in the demo, where nobody else is there to receive it. */
export const presentMail = (mail: Mail, { mode }: Config): MailView => ({
  id: mail.id,
  to: mail.to,
  person: mail.person?.name ?? null,
  subject: mail.subject,
  text: mode === 'demo' ? mail.text : masked(mail),
  state: mail.state,
  topic: mail.topic,
  attempts: mail.attempts,
  createdAt: mail.createdAt.toISOString(),
  sentAt: mail.sentAt?.toISOString() ?? null,
  lastError: mail.lastError ?? null,
  may: { retry: mail.state === 'sent' ? { allowed: false, why: 'It was sent already.' } : mail.state === 'gathered' ? { allowed: false, why: 'It went out in a digest.' } : { allowed: true } },
})
