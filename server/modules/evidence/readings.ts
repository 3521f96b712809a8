import type { ColumnMapping, LogProgress } from '../../../shared/contract/evidence.ts'
import { placeIn } from '../../db/file-store.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import type { JobBoard } from '../../jobs/job-board.ts'
import type { Person } from '../people/person.entity.ts'
import type { Evidence } from './evidence.entity.ts'
import { finishReading } from './finish-reading.ts'

/** One log being read on a thread of its own. */
interface Reading {
  progress: LogProgress
  stopper: AbortController
  ended: Promise<void>
}

/** Of each program that runs; what is under way ends with it, and the log stays as it was sent. */
const readingsOf = new WeakMap<JobBoard, Map<number, Reading>>()

const readings = ({ checks }: Pick<Services, 'checks'>) => {
  const known = readingsOf.get(checks) ?? new Map<number, Reading>()
  readingsOf.set(checks, known)
  return known
}

const idle: LogProgress = { state: 'idle', done: 0, total: 0, problem: '', errors: [] }

export const progressOf = (services: Pick<Services, 'checks'>, evidence: Evidence): LogProgress => readings(services).get(evidence.id)?.progress ?? idle

/** Resolves when the log is no longer being read, one way or the other. */
export const readingEnded = (services: Pick<Services, 'checks'>, evidence: { id: number }): Promise<void> => readings(services).get(evidence.id)?.ended ?? Promise.resolve()

/** Which of the columns chosen a refusal of the numerics is about. */
function pointersOf(field: string, mapping: readonly ColumnMapping[]): string[] {
  const column = /^column (\d+)$/.exec(field)
  const signal = /^log\.(\w+)$/.exec(field)?.[1].replace('_', '-')
  const k = mapping.findIndex((m) => (column ? m.column === Number(column[1]) : m.signal === signal))
  return k < 0 ? [] : [`/mapping/${k}/${column ? 'column' : 'unit'}`]
}

/**
 * Begins to read a log's columns, away from the event loop. Whoever asks again hears how far it is.
 *
 * @throws DomainError wrong-state while it is being read already
 */
export function beginReading(services: Services, evidence: Evidence, { mapping, person }: { mapping: ColumnMapping[]; person: Person }): void {
  const known = readings(services)
  if (known.get(evidence.id)?.progress.state === 'running') throw new DomainError('wrong-state', `${evidence.name} is being read already. Nothing was altered; wait for its end, or stop it.`)
  const stopper = new AbortController()
  const progress: LogProgress = { state: 'running', done: 0, total: evidence.bytes, problem: '', errors: [] }
  const end = (state: 'stopped' | 'failed', problem: string, field = '') =>
    Object.assign(progress, { state, problem, errors: pointersOf(field, mapping).map((pointer) => ({ pointer, detail: problem })) })
  const run = async () => {
    const file = { path: placeIn(services.files.directory, evidence.storedSha256), sha256: evidence.storedSha256 }
    const outcome = await services.checks.aside({ kind: 'read log', inputs: { file, layout: evidence.layout, mapping } }, (done) => void (progress.done = done), stopper.signal)
    if (outcome.kind === 'refused') return void end('failed', outcome.text, outcome.field)
    if (stopper.signal.aborted) return void end('stopped', '')
    await finishReading(services, evidence, { mapping, result: outcome.result, person })
    known.delete(evidence.id)
  }
  const ended = run().catch((error: Error) => {
    if (stopper.signal.aborted) end('stopped', '')
    else end('failed', error instanceof DomainError ? error.message : `The log could not be read: ${error.message}. It is kept as it was sent; read it again, and tell your administrator if it fails again.`)
  })
  known.set(evidence.id, { progress, stopper, ended })
}

/** Stops reading; the log is kept as it was sent. */
export function stopReading(services: Pick<Services, 'checks'>, evidence: Evidence): void {
  readings(services).get(evidence.id)?.stopper.abort()
}
