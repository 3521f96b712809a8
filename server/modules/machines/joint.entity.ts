import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Machine } from './machine.entity.ts'

/** A joint of a machine: the identity that its released settings, by release, belong to. */
export const Joint = defineEntity({
  name: 'Joint',
  uniques: [{ properties: ['machine', 'key'] }],
  properties: {
    id: p.integer().primary(),
    machine: () => p.manyToOne(Machine),
    key: p.string().length(40),
    name: p.string().length(80),
    createdAt: p.datetime(),
    /** when a release left it out */
    retiredAt: p.datetime().nullable(),
  },
})
export type Joint = InferEntity<typeof Joint>
