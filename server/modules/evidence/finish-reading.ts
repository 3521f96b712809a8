import { Readable } from 'node:stream'
import { logLimit, type ColumnMapping } from '../../../shared/contract/evidence.ts'
import type { Services } from '../../http/services.ts'
import type { ReadLogResult } from '../../jobs/logs/read-log.ts'
import { tellOf } from '../changes/events.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { markRead, type Evidence } from './evidence.entity.ts'
import { again, subjectOf } from './locate.ts'
import { mustAttach } from './may-attach.ts'
import { checkForEvidence, renewContent } from './renew-content.ts'

interface Outcome {
  mapping: ColumnMapping[]
  result: ReadLogResult
  person: Person
}

/**
 * Keeps what was read of a log: from here on it is evidence, and part of the content of its change.
 *
 * @throws DomainError wrong-state when its change was signed, or the log removed, meanwhile
 */
export async function finishReading(services: Services, evidence: Evidence, { mapping, result, person }: Outcome): Promise<void> {
  const file = await services.files.receive(Readable.from([Buffer.from(result.columns)]), 2 * logLimit)
  await services.files.keep(file)
  // in hand until a row names it: nobody takes it away for an orphan meanwhile
  try {
    await note(services, evidence, { mapping, result, person, columnsSha256: file.sha256 })
  } finally {
    await file.discard()
  }
}

async function note(services: Services, evidence: Evidence, { mapping, result, person, columnsSha256 }: Outcome & { columnsSha256: string }): Promise<void> {
  const fork = services.orm.em.fork()
  const before = await again(fork, evidence)
  const check = await checkForEvidence(services, fork, before.change)
  const now = services.now()
  await services.orm.em.fork().transactional(async (em) => {
    const fresh = await again(em, evidence)
    if (fresh.change) await mustAttach(em, fresh.change, person)
    markRead(fresh, { mapping, reading: result.reading, columnsSha256 }, now)
    if (fresh.change) await renewContent(em, fresh.change, check, now)
    const columns = Object.fromEntries(mapping.map((m) => [m.signal, `${fresh.layout.columns[m.column].name} in ${m.unit}`]))
    await appendEntry(em, { at: now, person, act: 'evidence read', subject: subjectOf(fresh), details: { evidence: fresh.number, name: fresh.name, sha256: fresh.sha256, rows: result.reading.rows, columns, columnsSha256, repairs: result.reading.repairs } })
  })
  const after = (await again(services.orm.em.fork(), evidence)).change
  if (after) tellOf(services, after.id, { kind: 'moved', by: person.name, at: now.toISOString(), revision: after.revision, state: after.state })
}
