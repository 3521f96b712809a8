import type { EntityManager } from '@mikro-orm/core'
import type { InvitePerson } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { normalEmail } from './check-credentials.ts'
import { addGrant } from './grant-role.ts'
import { linkLetter, roleWords } from './letters.ts'
import { makeLink } from './make-link.ts'
import { noPassword, Person } from './person.entity.ts'

/** Control characters, halves of characters, and those that turn the writing direction: a name stands in mails, in the ledger and on bench cards. */
const unprintable = /[\p{Cc}\p{Cs}\u202A-\u202E\u2066-\u2069]/u

/** @throws DomainError invalid-request */
export function plainName(name: string): string {
  if (unprintable.test(name)) throw new DomainError('invalid-request', 'The name holds characters that cannot be printed. Nobody was invited; type it anew.', { fields: [{ pointer: '/name', detail: 'holds characters that cannot be printed' }] })
  return name.trim()
}

/**
 * Invites a person with the roles given: they set their own password by a single-use link mailed to them.
 *
 * @throws DomainError already-exists when the address is known; invalid-request for a machine that is not there
 */
export async function invitePerson(em: EntityManager, { request, person: by, baseUrl, now }: { request: InvitePerson; person: Person; baseUrl: string; now: Date }): Promise<Person> {
  const email = normalEmail(request.email)
  if ((await em.count(Person, { email })) > 0)
    throw new DomainError('already-exists', `Somebody with the address ${email} is known already, perhaps disabled. Nobody was invited; grant them roles instead.`, { fields: [{ pointer: '/email', detail: 'is known already' }] })
  const invited = em.create(Person, { name: plainName(request.name), email, passwordHash: noPassword, createdAt: now })
  const roles: string[] = []
  for (const [i, asked] of request.roles.entries()) {
    const grant = await addGrant(em, { to: invited, asked, by, now, pointer: `/roles/${i}` })
    roles.push(roleWords(grant.role, asked.machine))
  }
  const { address, link } = makeLink(em, { person: invited, baseUrl, askedBy: by, now })
  queueMail(em, { person: invited, ...linkLetter(invited, link, address, by), secretLink: address, now })
  await em.flush()
  await appendEntry(em, { at: now, person: by, act: 'person invited', subject: { person: invited.name }, details: { personId: invited.id, email, roles } })
  return invited
}
