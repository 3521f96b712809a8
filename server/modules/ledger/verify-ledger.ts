import type { EntityManager } from '@mikro-orm/core'
import type { LedgerVerdict } from '../../../shared/contract/ledger.ts'
import { entryHash, genesisHash } from './append-entry.ts'
import { LedgerEntry } from './ledger-entry.entity.ts'

const pageSize = 1000

/** Walks the whole chain and names the first entry that does not hold. */
export async function verifyLedger(em: EntityManager): Promise<LedgerVerdict> {
  let previousHash = genesisHash
  let expected = 1
  for (;;) {
    const page = await em.fork().find(LedgerEntry, { sequence: { $gte: expected } }, { orderBy: { sequence: 'asc' }, limit: pageSize })
    for (const entry of page) {
      const bad = (why: string): LedgerVerdict => ({ holds: false, entries: expected - 1, sequence: expected, why })
      if (entry.sequence !== expected) return bad(`entry ${expected} is missing; the next one is ${entry.sequence}`)
      if (entry.previousHash !== previousHash) return bad('it does not follow the entry before it')
      if (entryHash(entry) !== entry.hash) return bad('its content does not match its hash')
      previousHash = entry.hash
      expected += 1
    }
    if (page.length < pageSize) return { holds: true, entries: expected - 1, lastHash: previousHash }
  }
}
