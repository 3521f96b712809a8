/** A log's columns as stored: one line of JSON, then the numbers, little-endian doubles column after column; all of it gzipped. */
import { createHash } from 'node:crypto'
import { existsSync, readFileSync } from 'node:fs'
import { gunzipSync, gzipSync } from 'node:zlib'
import type { LogSignal } from '../../../shared/contract/evidence.ts'
import { logLimit } from '../../../shared/contract/evidence.ts'
import { NumericError } from '../../control/errors.ts'

export interface StoredColumns {
  rows: number
  signals: LogSignal[]
  columns: Float64Array[]
  /** unit of the set-point in SI: rad, rad/s or A; empty without one */
  setPointUnit: string
}

/** Where a stored file lies, and what its bytes must hash to. */
export interface FileAt {
  path: string
  sha256: string
}

const FORMAT = 'detent-log-columns/1'

export function packColumns({ rows, signals, columns, setPointUnit }: StoredColumns): Uint8Array {
  const head = Buffer.from(`${JSON.stringify({ format: FORMAT, rows, signals, setPointUnit })}\n`)
  // Zero bytes up to the next multiple of eight, so that the doubles lie where they can be read in place.
  const start = Math.ceil(head.length / 8) * 8
  const body = Buffer.alloc(start + columns.length * rows * 8)
  head.copy(body)
  columns.forEach((c, k) => Buffer.from(c.buffer, c.byteOffset, rows * 8).copy(body, start + k * rows * 8))
  return gzipSync(body, { level: 1 })
}

/** Where they lie, or copied where they lie askew. */
const doublesAt = (body: Buffer, at: number, rows: number): Float64Array =>
  (body.byteOffset + at) % 8 === 0 ? new Float64Array(body.buffer, body.byteOffset + at, rows) : new Float64Array(body.buffer.slice(body.byteOffset + at, body.byteOffset + at + rows * 8))

/** @throws Error for bytes that are not a columns file */
export function unpackColumns(bytes: Uint8Array): StoredColumns {
  const body = gunzipSync(bytes, { maxOutputLength: 2 * logLimit })
  const end = body.indexOf(10)
  const head = JSON.parse(body.toString('utf8', 0, end)) as Omit<StoredColumns, 'columns'> & { format: string }
  if (head.format !== FORMAT) throw new Error('the stored columns are of another form')
  const start = Math.ceil((end + 1) / 8) * 8
  const { rows, signals, setPointUnit } = head
  return { rows, signals, setPointUnit, columns: signals.map((_, k) => doublesAt(body, start + k * rows * 8, rows)) }
}

/** A stored file's bytes, held against its name. @throws NumericError bad-input when they differ or are missing */
export function readStored({ path, sha256 }: FileAt): Buffer {
  const told = (what: string) => new NumericError('bad-input', { field: 'file', text: `The stored file ${sha256.slice(0, 12)}… ${what}. Nothing was computed; restore it from a backup.` })
  if (!existsSync(path)) throw told('is missing')
  const bytes = readFileSync(path)
  if (createHash('sha256').update(bytes).digest('hex') !== sha256) throw told('has other bytes than its name states')
  return bytes
}
