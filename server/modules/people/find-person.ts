import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { Person } from './person.entity.ts'

export interface OfPerson extends Place {
  found: Person
}

export const nobodyHere = () => new DomainError('not-found', 'There is nobody at this address whom you may see. Check it; nothing was done.')

/** An id as it stands in a path, or null when it can't be one. */
export const readId = (text: string | undefined): number | null => (text !== undefined && /^[1-9]\d{0,8}$/.test(text) ? Number(text) : null)

/**
 * The person that a path names as `:person`.
 *
 * @throws DomainError not-found
 */
export async function ofPerson(em: EntityManager, params: Record<string, string>): Promise<OfPerson> {
  const id = readId(params.person)
  const found = id === null ? null : await em.findOne(Person, { id })
  if (!found) throw nobodyHere()
  return { machine: null, subject: { person: found.name }, found }
}

/** A person as the database holds them now, with the password's hash: what an act decides on, inside its transaction. */
export const freshPerson = (em: EntityManager, { id }: Pick<Person, 'id'>): Promise<Person> => em.findOneOrFail(Person, { id }, { populate: ['passwordHash'], refresh: true })
