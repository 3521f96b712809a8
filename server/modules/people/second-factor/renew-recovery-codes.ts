import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../../ledger/append-entry.ts'
import { queueMail } from '../../mail/queue-mail.ts'
import { recoveryCodesMadeLetter } from '../letters.ts'
import type { Person } from '../person.entity.ts'
import { proveCode } from './prove-code.ts'
import { makeRecoveryCodes } from './recovery-codes.ts'
import type { Seals } from './seals.ts'

/** New recovery codes for a person who has just re-entered the password and enters a code; the old ones end. @throws DomainError wrong-code, wrong-state */
export async function renewRecoveryCodes(em: EntityManager, { person: whose, code, seals, now }: { person: Person; code: string; seals: Seals; now: Date }): Promise<string[]> {
  const person = await proveCode(em, { person: whose, code, seals, now })
  const codes = await makeRecoveryCodes(em, person, now)
  queueMail(em, { person, ...recoveryCodesMadeLetter(person), now })
  await appendEntry(em, { at: now, person, act: 'recovery codes made', subject: { person: person.name }, details: { personId: person.id } })
  return codes
}
