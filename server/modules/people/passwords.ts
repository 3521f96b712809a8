import argon2 from 'argon2'
import { minPasswordLength } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'

/** argon2id at OWASP's minimum: 19 MiB, two passes, one lane (OWASP Password Storage Cheat Sheet). */
const options = { type: argon2.argon2id, memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const

/**
 * A password as it is kept. Slow on purpose: before a transaction, never in one.
 *
 * @param pointer  where in the request's body the password stands
 * @throws DomainError weak-password
 */
export async function hashPassword(password: string, pointer = '/password'): Promise<string> {
  if ([...password].length < minPasswordLength)
    throw new DomainError('weak-password', `A password takes at least ${minPasswordLength} characters; a few words in a row do well. Nothing was altered.`, { fields: [{ pointer, detail: `at least ${minPasswordLength} characters` }] })
  return argon2.hash(password, options)
}

const nobody = argon2.hash('nobody signs in with this', options)

/** Whether the password is right; takes as long when there is no such person. */
export async function passwordMatches(hash: string | null | undefined, password: string): Promise<boolean> {
  const right = await argon2.verify(hash ?? (await nobody), password)
  return right && typeof hash === 'string'
}
