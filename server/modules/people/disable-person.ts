import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { endSessions } from './end-sessions.ts'
import { freshPerson } from './find-person.ts'
import { mustLeaveAnAdministrator } from './last-administrator.ts'
import { disabledLetter } from './letters.ts'
import { endLinks } from './make-link.ts'
import { disable, type Person } from './person.entity.ts'

/**
 * Takes a person's access: sessions and unused links end at once, roles stay on record for when they are enabled again.
 *
 * @throws DomainError wrong-state when disabled already; last-administrator
 */
export async function disablePerson(em: EntityManager, { whom, person: by, now }: { whom: Person; person: Person; now: Date }): Promise<void> {
  const person = await freshPerson(em, whom)
  await mustLeaveAnAdministrator(em, person)
  disable(person, now)
  const sessions = await endSessions(em, person)
  await endLinks(em, person, now)
  queueMail(em, { person, ...disabledLetter(person, by), now })
  await appendEntry(em, { at: now, person: by, act: 'person disabled', subject: { person: person.name }, details: { personId: person.id, sessionsEnded: sessions } })
}
