import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Machine } from './machine.entity.ts'

/** A family of a machine: the identity that its released settings, by release, belong to. */
export const Family = defineEntity({
  name: 'Family',
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
export type Family = InferEntity<typeof Family>
