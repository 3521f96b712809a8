/** A log's text to stored columns in SI. */
import { gunzipSync } from 'node:zlib'
import { logLimit, type ColumnMapping, type LogLayout, type LogReading, type LogSignal } from '../../../shared/contract/evidence.ts'
import { parseUnit } from '../../../shared/units/unit.ts'
import { toSi } from '../../../shared/units/quantity.ts'
import { dimensionText } from '../../../shared/units/dimension.ts'
import type { BenchLog } from '../../control/identification/bench-log.ts'
import { checkLog } from '../../control/identification/bench-log.ts'
import { NumericError } from '../../control/errors.ts'
import { packColumns, readStored, type FileAt, type StoredColumns } from './columns-file.ts'
import { readRows } from './read-rows.ts'

export interface ReadLogInputs {
  file: FileAt
  layout: LogLayout
  mapping: ColumnMapping[]
}

export interface ReadLogResult {
  reading: LogReading
  /** the columns file's bytes */
  columns: Uint8Array
}

/** SI value of one of a unit. */
const factorOf = (unit: string) => toSi(1, unit)

const setPointUnitOf = (mapping: readonly ColumnMapping[]): string => {
  const found = mapping.find((m) => m.signal === 'set-point')
  return found ? dimensionText(parseUnit(found.unit)!.dimension) : ''
}

/** Stored columns as the numerics take them. @throws NumericError bad-input without a current */
export function benchLogOf({ signals, columns }: Pick<StoredColumns, 'signals' | 'columns'>): BenchLog {
  const of = (signal: LogSignal) => columns[signals.indexOf(signal)]
  const log: BenchLog = { time: of('time'), current: of('current') }
  for (const [signal, name] of [['set-point', 'set_point'], ['position', 'position'], ['speed', 'speed'], ['voltage', 'voltage'], ['duty', 'duty']] as const) if (signals.includes(signal)) log[name] = of(signal)
  return log
}

/**
 * Reads, converts to SI, looks over and packs a log.
 *
 * @param told  hears of bytes of text read
 * @throws NumericError bad-input, not-finite, too-large (each names the column or row)
 */
export function readLog({ file, layout, mapping }: ReadLogInputs, told: (done: number) => void): ReadLogResult {
  const places = mapping.map((m) => m.column)
  const read = readRows(unpacked(readStored(file)), layout, places, told)
  const { columns } = read
  // in place: a million rows are read into no more memory than they need
  mapping.forEach(({ unit }, k) => {
    const factor = factorOf(unit)
    const column = columns[k]
    if (factor !== 1) for (let row = 0; row < column.length; row++) column[row] *= factor
  })
  const signals = mapping.map((m) => m.signal)
  const log = benchLogOf({ signals, columns })
  const checked = checkLog(log)
  const time = log.time
  return {
    columns: packColumns({ rows: read.rows, signals, columns, setPointUnit: setPointUnitOf(mapping) }),
    reading: { rows: read.rows, from: time[0], to: time[read.rows - 1], rate: 1 / checked.dt, signals, stretches: checked.stretches.length, repairs: [...read.repairs, ...checked.repairs] },
  }
}

function unpacked(stored: Uint8Array): Uint8Array {
  try {
    return gunzipSync(stored, { maxOutputLength: logLimit + 1024 })
  } catch {
    throw new NumericError('bad-input', { field: 'file', text: 'The stored log can not be unpacked. Nothing was read; upload it again.' })
  }
}
