import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { Mail, retry } from './mail.entity.ts'

/** Puts a mail that waits or failed back to be sent at once. @throws DomainError wrong-state when it was sent */
export async function retryMail(em: EntityManager, { mail: { id }, person, now }: { mail: Mail; person: Person; now: Date }): Promise<Mail> {
  const mail = await em.findOneOrFail(Mail, { id }, { populate: ['person'], refresh: true })
  retry(mail, now)
  await appendEntry(em, { at: now, person, act: 'mail sent again', subject: mail.person ? { person: mail.person.name } : {}, details: { mail: mail.id, subject: mail.subject } })
  return mail
}
