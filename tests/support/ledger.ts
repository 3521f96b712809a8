import { LedgerEntry } from '../../server/modules/ledger/ledger-entry.entity.ts'
import type { Workplace } from './workplace.ts'

/** The newest entries of the ledger, newest first, as plain act, subject and details. */
export async function lastEntries(w: Workplace, count = 1): Promise<Pick<LedgerEntry, 'act' | 'subject' | 'details' | 'personName'>[]> {
  const entries = await w.orm.em.fork().find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: count })
  return entries.map(({ act, subject, details, personName }) => ({ act, subject, details, personName }))
}
