import canonicalize from 'canonicalize'
import type { EntityManager } from '@mikro-orm/core'
import type { HeldRole } from '../people/permissions.ts'
import { covered } from './append-entry.ts'
import { LedgerEntry } from './ledger-entry.entity.ts'
import { readable } from './read-ledger.ts'

const pageSize = 1000

export interface LedgerExport {
  bytes: Uint8Array
  entries: number
}

/** Every entry that somebody who holds these roles may read, oldest first, page by page. */
export async function* entriesOldestFirst(em: EntityManager, held: readonly HeldRole[]): AsyncGenerator<LedgerEntry> {
  let after = 0
  for (;;) {
    const page = await em.fork().find(LedgerEntry, { $and: [readable(held), { sequence: { $gt: after } }] }, { orderBy: { sequence: 'asc' }, limit: pageSize })
    yield* page
    if (page.length < pageSize) return
    after = page[page.length - 1].sequence
  }
}

/**
 * The ledger as JSON lines, oldest first, each line in RFC 8785 form.
 *
 * A line without its `hash` is exactly what that hash covers; `previousHash` is the hash of the line before. So anybody can prove the
 * chain without Detent. A reader of some machines gets their entries alone, each provable by itself, the chain with gaps.
 */
export async function exportLedger(em: EntityManager, held: readonly HeldRole[]): Promise<LedgerExport> {
  const lines: Buffer[] = []
  for await (const entry of entriesOldestFirst(em, held)) lines.push(Buffer.from(`${canonicalize({ ...covered(entry), hash: entry.hash })}\n`))
  return { bytes: Buffer.concat(lines), entries: lines.length }
}
