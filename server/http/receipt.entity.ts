import { defineEntity, p, type InferEntity } from '@mikro-orm/core'

/** The answer to an act that carried an Idempotency-Key, written in the act's own transaction; a repeat gets it again. */
export const Receipt = defineEntity({
  name: 'Receipt',
  uniques: [{ properties: ['personId', 'key'] }],
  properties: {
    id: p.integer().primary(),
    personId: p.integer(),
    key: p.string().length(80),
    requestHash: p.string().length(64),
    status: p.integer(),
    body: p.text(),
    createdAt: p.datetime(),
  },
})
export type Receipt = InferEntity<typeof Receipt>
