import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { Role } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Person } from './person.entity.ts'

/** A role held by a person on one machine, or on all of them when machine is null. Ended grants stay on record. */
export const RoleGrant = defineEntity({
  name: 'RoleGrant',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person),
    machine: () => p.manyToOne(Machine).nullable(),
    role: p.string().$type<Role>(),
    grantedBy: () => p.manyToOne(Person).nullable(),
    grantedAt: p.datetime(),
    /** a signing role gives its right only once a second signer confirmed it */
    confirmedBy: () => p.manyToOne(Person).nullable(),
    confirmedAt: p.datetime().nullable(),
    endedAt: p.datetime().nullable(),
  },
})
export type RoleGrant = InferEntity<typeof RoleGrant>

export function confirm(grant: RoleGrant, by: Person, now: Date) {
  if (grant.confirmedAt) return
  grant.confirmedBy = by
  grant.confirmedAt = now
}

export function end(grant: RoleGrant, now: Date) {
  if (grant.endedAt) throw new DomainError('wrong-state', 'This role ended already. Nothing was altered.')
  grant.endedAt = now
}
