import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { endSessions } from './end-sessions.ts'
import { freshPerson } from './find-person.ts'
import { passwordChangedLetter } from './letters.ts'
import { endLinks } from './make-link.ts'
import type { Person } from './person.entity.ts'

/**
 * A signed-in person, who has just re-entered the old password, sets another. Their other sessions and unused links end.
 *
 * @param passwordHash  made before the transaction: hashing is slow
 * @param keep          the session it is done in
 */
export async function changePassword(em: EntityManager, { person: whose, passwordHash, keep, now }: { person: Person; passwordHash: string; keep: { idHash: string }; now: Date }): Promise<number> {
  const person = await freshPerson(em, whose)
  person.passwordHash = passwordHash
  await em.flush()
  await endLinks(em, person, now)
  const sessions = await endSessions(em, person, keep)
  queueMail(em, { person, ...passwordChangedLetter(person), now })
  await appendEntry(em, { at: now, person, act: 'password changed', subject: { person: person.name }, details: { personId: person.id, sessionsEnded: sessions } })
  return sessions
}
