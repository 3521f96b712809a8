import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../../ledger/append-entry.ts'
import { queueMail } from '../../mail/queue-mail.ts'
import { endSessions } from '../end-sessions.ts'
import { freshPerson } from '../find-person.ts'
import { secondFactorSetLetter } from '../letters.ts'
import { putSecondFactor, type Person } from '../person.entity.ts'
import { makeRecoveryCodes } from './recovery-codes.ts'

/**
 * A person's second factor counts from here on: a code of it was entered. Their other sessions end.
 *
 * @param sealed  the secret, closed for this person
 * @param step    time step of the code entered, which is used up by it
 * @returns recovery codes, to be shown once
 * @throws DomainError wrong-state when there is one already
 */
export async function setUpSecondFactor(em: EntityManager, { person: whose, sealed, step, keep, now }: { person: Person; sealed: string; step: number; keep: { idHash: string }; now: Date }): Promise<string[]> {
  const person = await freshPerson(em, whose)
  putSecondFactor(person, { sealed, step }, now)
  const codes = await makeRecoveryCodes(em, person, now)
  const sessions = await endSessions(em, person, keep)
  queueMail(em, { person, ...secondFactorSetLetter(person), now })
  await appendEntry(em, { at: now, person, act: 'second factor set up', subject: { person: person.name }, details: { personId: person.id, sessionsEnded: sessions } })
  return codes
}
