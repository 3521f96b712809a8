import { defineEntity, p, type InferEntity } from '@mikro-orm/core'

/** A machine type under control. What it is made of stands in its releases and drafts; this is its identity. */
export const Machine = defineEntity({
  name: 'Machine',
  properties: {
    id: p.integer().primary(),
    key: p.string().length(40).unique(),
    name: p.string().length(80),
    description: p.string().length(400),
    createdAt: p.datetime(),
    retiredAt: p.datetime().nullable(),
    /** last change number given out */
    lastChange: p.integer().default(0),
    /** last release sequence number given out; only grows */
    lastSequence: p.integer().default(0),
  },
})
export type Machine = InferEntity<typeof Machine>
