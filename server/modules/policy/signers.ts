import type { EntityManager } from '@mikro-orm/core'
import type { Machine } from '../machines/machine.entity.ts'
import type { Person } from '../people/person.entity.ts'
import { RoleGrant } from '../people/role-grant.entity.ts'

/** Release managers of a machine who can sign in, but for the person given: who is told of what waits for a signature. */
export async function releaseManagersOf(em: EntityManager, machine: Machine, but: Person): Promise<Person[]> {
  const grants = await em.find(RoleGrant, { role: 'release manager', endedAt: null, $or: [{ machine: null }, { machine }], person: { id: { $ne: but.id }, disabledAt: null } }, { populate: ['person'] })
  return [...new Map(grants.map((g) => [g.person.id, g.person])).values()]
}
