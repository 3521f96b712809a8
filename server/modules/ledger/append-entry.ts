import { createHash } from 'node:crypto'
import canonicalize from 'canonicalize'
import type { EntityManager } from '@mikro-orm/core'
import type { Person } from '../people/person.entity.ts'
import { LedgerEntry, type LedgerSubject } from './ledger-entry.entity.ts'

/** As it will be read back: what JSON does not hold falls away before the hash is taken. */
const plain = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T

export const genesisHash = '0'.repeat(64)

type Place = Pick<LedgerEntry, 'sequence' | 'hash'>

/** The chain's end as a transaction left it, by its context: nothing else appends while it runs. */
const ends = new WeakMap<object, Place>()

type Content = Pick<LedgerEntry, 'sequence' | 'at' | 'personId' | 'personName' | 'act' | 'machineKey' | 'subject' | 'details' | 'previousHash'>

/** The part of an entry that its hash covers. */
export const covered = (entry: Content) => ({
  sequence: entry.sequence,
  at: entry.at.toISOString(),
  personId: entry.personId ?? null,
  personName: entry.personName,
  act: entry.act,
  machine: entry.machineKey ?? null,
  subject: entry.subject,
  details: entry.details,
  previousHash: entry.previousHash,
})

/** SHA-256 over the RFC 8785 form of what the hash covers, hex. */
export const entryHash = (entry: Content): string => createHash('sha256').update(canonicalize(covered(entry))!).digest('hex')

/**
 * Appends an act to the ledger, in the transaction of the act itself.
 *
 * `em` must be inside a transaction: the entry takes the next place in the chain, and nothing else may take it meanwhile.
 */
export async function appendEntry(
  em: EntityManager,
  entry: { at: Date; person: Pick<Person, 'id' | 'name'> | null; act: string; subject?: LedgerSubject; details?: Record<string, unknown> },
): Promise<{ sequence: number; hash: string }> {
  const transaction = em.getTransactionContext<object>()
  if (!transaction) throw new Error('ledger entries are appended inside the transaction of their act')
  await em.flush()
  // Past the unit of work: an entry that nothing will alter needs no watching, and a transaction may append many.
  const last: Place | undefined = ends.get(transaction) ?? (await em.find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: 1, disableIdentityMap: true }))[0]
  const subject = plain(entry.subject ?? {})
  const fields = {
    sequence: (last?.sequence ?? 0) + 1,
    at: entry.at,
    personId: entry.person?.id ?? null,
    personName: entry.person?.name ?? 'Detent',
    act: entry.act,
    machineKey: subject.machine ?? null,
    subject,
    details: plain(entry.details ?? {}),
    previousHash: last?.hash ?? genesisHash,
  }
  const hash = entryHash(fields)
  await em.insert(LedgerEntry, { ...fields, hash })
  const place = { sequence: fields.sequence, hash }
  ends.set(transaction, place)
  return place
}
