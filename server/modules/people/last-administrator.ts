import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Person } from './person.entity.ts'
import { RoleGrant } from './role-grant.entity.ts'

/** Everybody who can keep people now: administrators on all machines who have a password and are not disabled. */
export async function administrators(em: EntityManager): Promise<Set<number>> {
  const grants = await em.find(RoleGrant, { role: 'administrator', machine: null, endedAt: null, person: { disabledAt: null, passwordHash: { $ne: null } } })
  return new Set(grants.map((g) => g.person.id))
}

/** @throws DomainError last-administrator when nobody but this person could keep people */
export async function mustLeaveAnAdministrator(em: EntityManager, without: Person): Promise<void> {
  const left = await administrators(em)
  if (left.has(without.id) && left.size === 1)
    throw new DomainError('last-administrator', `${without.name} is the last administrator on all machines. Nothing was altered; grant another person who can sign in that role first.`)
}
