import argon2 from 'argon2'
import { minPasswordLength } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { whyCommon } from './common-passwords.ts'

/** argon2id at OWASP's minimum: 19 MiB, two passes, one lane (OWASP Password Storage Cheat Sheet). */
const options = { type: argon2.argon2id, memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const

/**
 * A new password as it is kept. Slow on purpose: before a transaction, never in one.
 *
 * @param pointer  where in the request's body the password stands
 * @param of       whose it is going to be: their name and address are no password
 * @throws DomainError weak-password
 */
export async function hashPassword(password: string, pointer = '/password', of: { name: string; email: string } | null = null): Promise<string> {
  if ([...password].length < minPasswordLength)
    throw new DomainError('weak-password', `A password takes at least ${minPasswordLength} characters; a few words in a row do well. Nothing was altered.`, { fields: [{ pointer, detail: `at least ${minPasswordLength} characters` }] })
  const why = whyCommon(password, of)
  if (why) throw new DomainError('weak-password', `This password ${why}, and would be guessed early. Nothing was altered; a few words that only you put in a row do well.`, { fields: [{ pointer, detail: why }] })
  return hashKnown(password)
}

/** A password that was taken before, hashed by what is asked now. */
export const hashKnown = (password: string): Promise<string> => argon2.hash(password, options)

/** Whether a kept hash was made with less than is asked now: it is made anew when the password is next at hand. */
export const isOutdated = (hash: string): boolean => argon2.needsRehash(hash, options)

const nobody = argon2.hash('nobody signs in with this', options)

/** Whether the password is right; takes as long when there is no such person. */
export async function passwordMatches(hash: string | null | undefined, password: string): Promise<boolean> {
  const right = await argon2.verify(hash ?? (await nobody), password)
  return right && typeof hash === 'string'
}
