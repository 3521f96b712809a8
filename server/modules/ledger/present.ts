import type { LedgerEntryView } from '../../../shared/contract/ledger.ts'
import type { LedgerEntry } from './ledger-entry.entity.ts'

export const presentEntry = (entry: LedgerEntry): LedgerEntryView => ({
  sequence: entry.sequence,
  at: entry.at.toISOString(),
  person: entry.personName,
  act: entry.act,
  machine: entry.machineKey ?? null,
  subject: entry.subject as Record<string, string | number>,
  details: entry.details,
  hash: entry.hash,
  previousHash: entry.previousHash,
})
