import type { Orm } from '../../db/orm.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { LedgerSubject } from '../ledger/ledger-entry.entity.ts'
import type { Person } from '../people/person.entity.ts'

interface Download {
  act: 'kit downloaded' | 'release file downloaded' | 'firmware image downloaded'
  subject: LedgerSubject
  details: Record<string, unknown>
  person: Person
  /** name of the bench key that fetched it */
  benchKey: string | null
  now: Date
}

/** Puts a download into the ledger before the bytes leave, in a transaction of its own: reading alters nothing else. */
export async function recordDownload(orm: Orm, { act, subject, details, person, benchKey, now }: Download): Promise<void> {
  await orm.em.fork().transactional((em) => appendEntry(em, { at: now, person, act, subject, details: { ...details, ...(benchKey === null ? {} : { benchKey }) } }))
}
