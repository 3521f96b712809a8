import type { EntityManager } from '@mikro-orm/core'
import type { HeldRole } from './permissions.ts'
import { isSigning } from './permissions.ts'
import type { Person } from './person.entity.ts'
import { RoleGrant } from './role-grant.entity.ts'

/** The roles a person holds now. A signing role counts as confirmed only while nothing holds the person's signatures. */
export async function heldRoles(em: EntityManager, person: Person): Promise<HeldRole[]> {
  const grants = await em.find(RoleGrant, { person, endedAt: null }, { populate: ['machine'] })
  return grants.map((g) => ({
    role: g.role,
    machine: g.machine?.key ?? null,
    confirmed: !isSigning(g.role) || (Boolean(g.confirmedAt) && !person.signingHold),
  }))
}
