import canonicalize from 'canonicalize'
import type { EntityManager } from '@mikro-orm/core'
import { csvLine } from '../../exports/csv-text.ts'
import type { HeldRole } from '../people/permissions.ts'
import { entriesOldestFirst } from './export-ledger.ts'

const columns = ['sequence', 'at', 'person', 'act', 'machine', 'subject', 'details', 'previous hash', 'hash'] as const

/**
 * The ledger as a table for a spreadsheet, oldest first; a text that it would take for a formula is written with a leading apostrophe.
 *
 * To be read by people: what proves the chain is the export as JSON lines.
 */
export async function exportCsv(em: EntityManager, held: readonly HeldRole[]): Promise<Uint8Array> {
  const lines = [csvLine(columns)]
  for await (const e of entriesOldestFirst(em, held))
    lines.push(csvLine([e.sequence, e.at.toISOString(), e.personName, e.act, e.machineKey ?? null, canonicalize(e.subject)!, canonicalize(e.details)!, e.previousHash, e.hash]))
  return Buffer.from(lines.join(''))
}
