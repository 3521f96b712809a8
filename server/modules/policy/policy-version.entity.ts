import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
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
