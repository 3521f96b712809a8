import type { EntityManager } from '@mikro-orm/core'
import { hashKnown, isOutdated, passwordMatches } from './passwords.ts'
import { Person } from './person.entity.ts'

export const normalEmail = (email: string) => email.trim().toLowerCase()

/** The person these credentials belong to, or null: unknown, without a password yet, disabled and wrong take the same time and look the same. */
export async function checkCredentials(em: EntityManager, email: string, password: string): Promise<Person | null> {
  const person = await em.findOne(Person, { email: normalEmail(email) }, { populate: ['passwordHash'] })
  const right = await passwordMatches(person?.passwordHash, password)
  if (!right || !person || person.disabledAt !== null) return null
  if (isOutdated(person.passwordHash)) await em.nativeUpdate(Person, { id: person.id, passwordHash: person.passwordHash }, { passwordHash: await hashKnown(password) })
  return person
}

/** Whether a signed-in person re-entered their own password. */
export async function reentered(em: EntityManager, person: Person, password: string): Promise<boolean> {
  const fresh = await em.findOne(Person, { id: person.id }, { populate: ['passwordHash'], refresh: true })
  return passwordMatches(fresh?.passwordHash, password)
}
