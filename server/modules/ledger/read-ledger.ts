import type { EntityManager, FilterQuery } from '@mikro-orm/core'
import type { LedgerPage } from '../../../shared/contract/ledger.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { LedgerEntry } from './ledger-entry.entity.ts'
import { presentEntry } from './present.ts'

export const ledgerPageSize = 100

/** Entries that somebody who holds these roles may read: of the machines they read, and those of no machine. */
export function readable(held: readonly HeldRole[]): FilterQuery<LedgerEntry> {
  if (held.some((h) => h.machine === null && may([h], 'read', null).allowed)) return {}
  const machines = [...new Set(held.flatMap((h) => (h.machine !== null && may(held, 'read', h.machine).allowed ? [h.machine] : [])))]
  return { $or: [{ machineKey: null }, { machineKey: { $in: machines } }] }
}

export interface LedgerAsk {
  before: number | null
  act: string | null
  machine: string | null
  /** who acted: their id, or their name */
  person: string | null
}

/** A page of the ledger, newest first. */
export async function readLedger(em: EntityManager, held: readonly HeldRole[], ask: LedgerAsk): Promise<LedgerPage> {
  const asked: FilterQuery<LedgerEntry>[] = [readable(held)]
  if (ask.act !== null) asked.push({ act: ask.act })
  if (ask.machine !== null) asked.push({ machineKey: ask.machine })
  if (ask.person !== null) asked.push(/^\d+$/.test(ask.person) ? { personId: Number(ask.person) } : { personName: ask.person })
  const upTo: FilterQuery<LedgerEntry>[] = ask.before === null ? asked : [...asked, { sequence: { $lt: ask.before } }]
  const found = await em.find(LedgerEntry, { $and: upTo }, { orderBy: { sequence: 'desc' }, limit: ledgerPageSize + 1 })
  const shown = found.slice(0, ledgerPageSize)
  const acts = (await em.getConnection().execute('select distinct act from ledger_entry order by act')) as { act: string }[]
  return {
    entries: shown.map(presentEntry),
    next: found.length > ledgerPageSize ? shown[ledgerPageSize - 1].sequence : null,
    total: await em.count(LedgerEntry, { $and: asked }),
    acts: acts.map((a) => a.act),
  }
}
