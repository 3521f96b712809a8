import { createHash, randomBytes } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import { recoveryCodeCount } from '../../../../shared/contract/second-factor.ts'
import type { Person } from '../person.entity.ts'
import { RecoveryCode } from './recovery-code.entity.ts'

/** Crockford's base 32: no I, L, O and U, which are read as others. */
const alphabet = '0123456789ABCDEFGHJKMNPQRSTVWXYZ'

/** 24 characters carry 120 random bits: enough for a plain hash at rest. In fours, to be written down. */
const newCode = () => [...randomBytes(24)].map((byte) => alphabet[byte % 32]).join('').replaceAll(/.{4}(?=.)/g, '$&-')

/** As it was made, whatever case it is typed in, and with letters for the digits that look like them. */
const normal = (code: string) => code.toUpperCase().replaceAll(/[^0-9A-Z]/g, '').replaceAll('O', '0').replaceAll(/[IL]/g, '1')

export const looksLikeRecoveryCode = (code: string) => normal(code).length === 24

const codeHash = (code: string) => createHash('sha256').update(`recovery code ${normal(code)}`).digest('hex')

/** New recovery codes in the place of the old ones. @returns the codes, to be shown once */
export async function makeRecoveryCodes(em: EntityManager, person: Person, now: Date): Promise<string[]> {
  await endRecoveryCodes(em, person)
  const codes = Array.from({ length: recoveryCodeCount }, newCode)
  for (const code of codes) em.create(RecoveryCode, { person, codeHash: codeHash(code), createdAt: now, usedAt: null })
  return codes
}

export const endRecoveryCodes = (em: EntityManager, person: Person): Promise<number> => em.nativeDelete(RecoveryCode, { person })

export const codesLeft = (em: EntityManager, person: Pick<Person, 'id'>): Promise<number> => em.count(RecoveryCode, { person: { id: person.id }, usedAt: null })

/** Takes a code out of use. @returns false when it is none of this person's, or was used */
export async function takeRecoveryCode(em: EntityManager, person: Person, code: string, now: Date): Promise<boolean> {
  return (await em.nativeUpdate(RecoveryCode, { person, codeHash: codeHash(code), usedAt: null }, { usedAt: now })) === 1
}
