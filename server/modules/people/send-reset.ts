import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { freshPerson } from './find-person.ts'
import { linkLetter } from './letters.ts'
import { makeLink } from './make-link.ts'
import type { Person } from './person.entity.ts'

/**
 * An administrator asks for a person's reset: a link is mailed to them, and nothing is set until they use it.
 * Who has no password yet gets a new invitation.
 *
 * @throws DomainError wrong-state when the person is disabled
 */
export async function sendReset(em: EntityManager, { whom, person: by, baseUrl, now }: { whom: Person; person: Person; baseUrl: string; now: Date }): Promise<void> {
  const person = await freshPerson(em, whom)
  if (person.disabledAt) throw new DomainError('wrong-state', `${person.name} is disabled. No link was sent; enable them first.`)
  const { address, link } = makeLink(em, { person, baseUrl, askedBy: by, now })
  queueMail(em, { person, ...linkLetter(person, link, address, by), secretLink: address, now })
  await appendEntry(em, { at: now, person: by, act: link.kind === 'reset' ? 'reset link sent' : 'invitation sent again', subject: { person: person.name }, details: { personId: person.id } })
}
