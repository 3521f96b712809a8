import { defineEntity, p, type InferEntity } from '@mikro-orm/core'

/** What an entry is about: names, so that an entry reads by itself. */
export interface LedgerSubject {
  machine?: string
  change?: string
  release?: string
  joint?: string
  board?: string
  firmware?: string
  person?: string
  policy?: number
}

/** One act, chained to the one before it. Never updated, never deleted. */
export const LedgerEntry = defineEntity({
  name: 'LedgerEntry',
  // counts what a filter by both finds, without reading the entries
  indexes: [{ properties: ['machineKey', 'act'] }],
  properties: {
    /** position in the chain, from 1, without gaps */
    sequence: p.integer().primary().autoincrement(false),
    at: p.datetime(),
    personId: p.integer().nullable().index(),
    personName: p.string().length(120),
    act: p.string().length(60).index(),
    machineKey: p.string().length(40).nullable().index(),
    subject: p.json<LedgerSubject>(),
    details: p.json<Record<string, unknown>>(),
    previousHash: p.string().length(64),
    hash: p.string().length(64).unique(),
  },
})
export type LedgerEntry = InferEntity<typeof LedgerEntry>
