import type { EntityManager } from '@mikro-orm/core'
import { InvitePerson } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { validBody } from '../../http/validate.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { normalEmail } from './check-credentials.ts'
import { addGrant } from './grant-role.ts'
import { plainName } from './invite-person.ts'
import { linkLetter } from './letters.ts'
import { makeLink } from './make-link.ts'
import { noPassword, Person } from './person.entity.ts'

/**
 * Founds a workplace: its first administrator, invited by a single-use link, which is mailed and handed back for the operator of the machine.
 *
 * While nobody has a password it can be done again: the same address gets a new link.
 *
 * @param em  inside a transaction
 * @returns the link's address
 * @throws DomainError invalid-request; already-exists when somebody can sign in
 */
export async function foundWorkplace(em: EntityManager, { name, email, baseUrl, now }: { name: string; email: string; baseUrl: string; now: Date }): Promise<string> {
  if ((await em.count(Person, { passwordHash: { $ne: null } })) > 0)
    throw new DomainError('already-exists', 'This workplace has people who can sign in. Nothing was made; ask one of its administrators for an invitation.')
  validBody(InvitePerson, { name, email, roles: [] })
  const address = normalEmail(email)
  const known = await em.findOne(Person, { email: address }, { populate: ['passwordHash'] })
  const person = known ?? em.create(Person, { name: plainName(name), email: address, passwordHash: noPassword, createdAt: now })
  if (!known) await addGrant(em, { to: person, asked: { role: 'administrator', machine: null }, by: null, now, pointer: '' })
  const made = makeLink(em, { person, baseUrl, askedBy: null, now })
  queueMail(em, { person, ...linkLetter(person, made.link, made.address, null), secretLink: made.address, now })
  await em.flush()
  await appendEntry(em, { at: now, person: null, act: known ? 'invitation sent again' : 'workplace founded', subject: { person: person.name }, details: { personId: person.id, email: address } })
  return made.address
}
