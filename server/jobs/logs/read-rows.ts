/** Rows of a log's text as numbers. */
import type { LogLayout } from '../../../shared/contract/evidence.ts'
import { MAX_ROWS } from '../../control/identification/bench-log.ts'
import { NumericError } from '../../control/errors.ts'
import { parseNumber } from './parse-number.ts'

const [LF, CR, QUOTE, HASH] = [10, 13, 34, 35]
/** Share of rows that may be left out; past it the log is refused. */
const LEAST_GOOD = 0.99
/** Rows between two tellings of the progress. */
const STEP = 8192

export interface ReadRows {
  /** one array for each column asked for */
  columns: Float64Array[]
  rows: number
  repairs: string[]
}

/**
 * Reads the columns asked for.
 *
 * Rows with another number of cells than the first, or without a number in a column asked for, are left out and counted; where they
 * are more than one in a hundred the log is refused. A last line cut off in the middle is left out.
 *
 * @param wanted  places of the columns, each once
 * @param told    hears of bytes read
 * @throws NumericError bad-input, too-large (names the row)
 */
export function readRows(bytes: Uint8Array, layout: LogLayout, wanted: readonly number[], told: (done: number) => void): ReadRows {
  const width = layout.columns.length
  const delimiter = layout.delimiter.charCodeAt(0)
  const point = layout.decimal.charCodeAt(0)
  let capacity = roomFor(bytes)
  let columns = wanted.map(() => new Float64Array(capacity))
  const slot = new Int32Array(width).fill(-1)
  wanted.forEach((column, k) => (slot[column] = k))
  const row = new Float64Array(wanted.length)
  const bad = { width: 0, widthAt: 0, number: 0, numberAt: 0, numberColumn: 0 }
  let rows = 0
  let line = 0
  let at = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0
  let cutOff = false
  while (at < bytes.length) {
    const start = at
    let end = at
    let quoted = false
    let cell = 0
    let from = at
    let wrong = -1
    const skip = line < layout.skipped
    // One walk over the line: cells are read as they end.
    for (; ; end++) {
      const c = end < bytes.length ? bytes[end] : LF
      if (c === QUOTE) quoted = !quoted
      const ends = c === LF || c === CR
      if (ends || (c === delimiter && !quoted)) {
        if (!skip && cell < width && slot[cell] >= 0) {
          const value = parseNumber(bytes, from, end, point)
          if (value - value === 0) row[slot[cell]] = value
          else if (wrong < 0) wrong = cell
        }
        cell += 1
        from = end + 1
        if (ends) break
      }
    }
    const empty = end === start
    const last = end >= bytes.length
    at = end + 1
    if (bytes[end] === CR && bytes[end + 1] === LF) at += 1
    line += 1
    if ((line & (STEP - 1)) === 0) told(Math.min(at, bytes.length))
    if (skip || empty || bytes[start] === HASH) continue
    if (cell !== width) {
      if (last) cutOff = true
      else if (bad.width++ === 0) bad.widthAt = line
      continue
    }
    if (wrong >= 0) {
      if (bad.number++ === 0) [bad.numberAt, bad.numberColumn] = [line, wrong]
      continue
    }
    if (rows === MAX_ROWS) throw new NumericError('too-large', { field: 'rows', text: `The log has more than ${MAX_ROWS} rows. Nothing was read; cut it into runs, or log more slowly.` })
    if (rows === capacity) {
      capacity *= 2
      columns = columns.map((c) => {
        const wider = new Float64Array(capacity)
        wider.set(c)
        return wider
      })
    }
    for (let k = 0; k < row.length; k++) columns[k][rows] = row[k]
    rows += 1
  }
  told(bytes.length)
  const repairs = judged(rows, bad, layout)
  if (cutOff) repairs.push('The last line ends in the middle and was left out.')
  return { columns: columns.map((c) => c.subarray(0, rows)), rows, repairs }
}

/** Rows there may be, by the length of the first lines: growing means copying. */
function roomFor(bytes: Uint8Array): number {
  const seen = Math.min(bytes.length, 65_536)
  let lines = 1
  for (let k = 0; k < seen; k++) if (bytes[k] === LF) lines += 1
  return Math.min(MAX_ROWS, Math.ceil((1.1 * bytes.length * lines) / seen) + 64)
}

interface Bad {
  width: number
  widthAt: number
  number: number
  numberAt: number
  numberColumn: number
}

const rowsWords = (n: number) => (n === 1 ? 'One row' : `${n} rows`)

function judged(rows: number, bad: Bad, layout: LogLayout): string[] {
  const name = layout.columns[bad.numberColumn]?.name ?? ''
  const repairs: string[] = []
  if (bad.width > 0) repairs.push(`${rowsWords(bad.width)} had another number of cells than ${layout.columns.length} and ${bad.width === 1 ? 'was' : 'were'} left out, the first on line ${bad.widthAt}.`)
  if (bad.number > 0) repairs.push(`${rowsWords(bad.number)} held no number in a column in use and ${bad.number === 1 ? 'was' : 'were'} left out, the first on line ${bad.numberAt} in “${name}”.`)
  if (rows < LEAST_GOOD * (rows + bad.width + bad.number)) {
    throw new NumericError('bad-input', { field: bad.number >= bad.width ? `column ${bad.numberColumn}` : 'rows', text: `More than one row in a hundred can't be read. ${repairs.join(' ')} Nothing was kept of the reading; export the log again, or choose other columns.` })
  }
  return repairs
}
