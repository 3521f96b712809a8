import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../../ledger/append-entry.ts'
import { queueMail } from '../../mail/queue-mail.ts'
import { endSessions } from '../end-sessions.ts'
import { secondFactorRemovedLetter } from '../letters.ts'
import { dropSecondFactor, type Person } from '../person.entity.ts'
import { proveCode } from './prove-code.ts'
import { endRecoveryCodes } from './recovery-codes.ts'
import type { Seals } from './seals.ts'

/**
 * A person, who has just re-entered the password, takes their second factor away by a code of it or a recovery code, as when they move
 * to another phone. Their other sessions end.
 *
 * @throws DomainError wrong-code, wrong-state
 */
export async function removeSecondFactor(em: EntityManager, { person: whose, code, seals, keep, now }: { person: Person; code: string; seals: Seals; keep: { idHash: string }; now: Date }): Promise<void> {
  const person = await proveCode(em, { person: whose, code, seals, now })
  dropSecondFactor(person)
  await endRecoveryCodes(em, person)
  const sessions = await endSessions(em, person, keep)
  queueMail(em, { person, ...secondFactorRemovedLetter(person), now })
  await appendEntry(em, { at: now, person, act: 'second factor removed', subject: { person: person.name }, details: { personId: person.id, sessionsEnded: sessions } })
}
