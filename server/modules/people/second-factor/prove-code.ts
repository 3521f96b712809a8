import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../../http/errors.ts'
import { appendEntry } from '../../ledger/append-entry.ts'
import { queueMail } from '../../mail/queue-mail.ts'
import { recoveryCodeUsedLetter } from '../letters.ts'
import { Person } from '../person.entity.ts'
import { codesLeft, looksLikeRecoveryCode, takeRecoveryCode } from './recovery-codes.ts'
import type { Seals } from './seals.ts'
import { stepOf } from './totp.ts'

export const ownedBy = (person: Pick<Person, 'id'>) => `second factor of person ${person.id}`

export interface Proving {
  person: Pick<Person, 'id'>
  code: string
  seals: Seals
  now: Date
}

const wrong = (detail: string, field: string) => new DomainError('wrong-code', detail, { fields: [{ pointer: '/code', detail: field }], recorded: true })

/** @throws DomainError wrong-code; wrong-state when the secret's key is not the one that sealed it */
function useStep(person: Person, code: string, seals: Seals, now: Date) {
  const secret = seals.open(person.secondFactor ?? '', ownedBy(person))
  if (!secret) throw new DomainError('wrong-state', 'Your second factor cannot be read on this server: the key that sealed it is another one. Nothing was done; use a recovery code, or ask an administrator to reset it.')
  const step = stepOf(secret, code.replaceAll(/\s/g, ''), now)
  if (step === null) throw wrong('The code is wrong. Nothing was done; enter the one that your app shows now, and look at its clock if that is refused too.', 'is wrong')
  if (step <= (person.secondFactorStep ?? -1)) throw wrong('This code was used already, and each is good for one use. Nothing was done; wait for the next one.', 'was used already')
  person.secondFactorStep = step
}

/**
 * Proves the second factor of a person by a code of their app or by a recovery code, each of which is taken once.
 *
 * @param em  inside a transaction, which writes that it was taken
 * @returns the person, read anew
 * @throws DomainError wrong-code, wrong-state
 */
export async function proveCode(em: EntityManager, { person: whose, code, seals, now }: Proving): Promise<Person> {
  const person = await em.findOneOrFail(Person, { id: whose.id }, { populate: ['passwordHash', 'secondFactor'], refresh: true })
  if (!person.secondFactorAt) throw new DomainError('wrong-state', 'There is no second factor to enter a code of. Nothing was done; set one up on your account page.')
  if (!looksLikeRecoveryCode(code)) {
    useStep(person, code, seals, now)
    return person
  }
  if (!(await takeRecoveryCode(em, person, code, now))) throw wrong('This is none of your recovery codes, or it was used. Nothing was done; use another one, or a code of your app.', 'is none of your recovery codes, or was used')
  const left = await codesLeft(em, person)
  queueMail(em, { person, ...recoveryCodeUsedLetter(person, left), now })
  await appendEntry(em, { at: now, person, act: 'recovery code used', subject: { person: person.name }, details: { personId: person.id, left } })
  return person
}
