import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
import { DomainError } from '../../http/errors.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Person } from '../people/person.entity.ts'

/** A proposed or signed policy of a machine; in force is the signed one with the highest number. */
export const PolicyVersion = defineEntity({
  name: 'PolicyVersion',
  uniques: [{ properties: ['machine', 'number'] }],
  properties: {
    id: p.integer().primary(),
    machine: () => p.manyToOne(Machine),
    number: p.integer(),
    content: p.json<PolicyContent>(),
    reason: p.text(),
    /** null for the defaults a machine is made with */
    author: () => p.manyToOne(Person).nullable(),
    proposedAt: p.datetime(),
    signedBy: () => p.manyToOne(Person).nullable(),
    signedAt: p.datetime().nullable(),
    declinedAt: p.datetime().nullable(),
  },
})
export type PolicyVersion = InferEntity<typeof PolicyVersion>

export type PolicyState = 'proposed' | 'signed' | 'declined'

export const stateOf = (v: PolicyVersion): PolicyState => (v.signedAt ? 'signed' : v.declinedAt ? 'declined' : 'proposed')

function mustBeProposed(v: PolicyVersion, act: string) {
  const state = stateOf(v)
  if (state !== 'proposed') throw new DomainError('wrong-state', `Version ${v.number} of the policy is ${state}; it can't be ${act}. Nothing was altered.`)
}

export function sign(v: PolicyVersion, by: Person, now: Date) {
  mustBeProposed(v, 'signed')
  Object.assign(v, { signedBy: by, signedAt: now })
}

export function decline(v: PolicyVersion, now: Date) {
  mustBeProposed(v, 'declined')
  v.declinedAt = now
}
