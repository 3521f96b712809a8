/** A stretch of a stored log, drawn. */
import type { LogWindow } from '../../../shared/contract/evidence.ts'
import { checkLog } from '../../control/identification/bench-log.ts'
import { decimate } from '../../control/identification/decimate.ts'
import { readStored, unpackColumns, type FileAt, type StoredColumns } from './columns-file.ts'
import { benchLogOf } from './read-log.ts'

export interface WindowInputs {
  file: FileAt
  /** s; the whole log when null */
  from: number | null
  to: number | null
  pieces: number
}

const units = { time: 's', 'set-point': '', position: 'rad', speed: 'rad/s', current: 'A', voltage: 'V', duty: '1' } as const

export const unitOfSignal = (signal: keyof typeof units, stored: Pick<StoredColumns, 'setPointUnit'>) => (signal === 'set-point' ? stored.setPointUnit : units[signal])

/** First row at or after t. */
export function rowAt(time: ArrayLike<number>, t: number): number {
  let [low, high] = [0, time.length]
  while (low < high) {
    const middle = (low + high) >> 1
    if (time[middle] < t) low = middle + 1
    else high = middle
  }
  return low
}

export function logWindow({ file, from, to, pieces }: WindowInputs): LogWindow {
  const stored = unpackColumns(readStored(file))
  const { log, stretches } = checkLog(benchLogOf(stored))
  const { time } = log
  const first = from === null ? 0 : Math.max(0, rowAt(time, from) - 1)
  const end = to === null ? time.length : Math.min(time.length, rowAt(time, to) + 1)
  const gapsBefore = stretches.slice(1).map((s) => s.from)
  const drawn = stored.signals
    .filter((s) => s !== 'time')
    .map((signal) => {
      const values = signal === 'set-point' ? log.set_point! : log[signal as 'position']!
      const { x, y, rowsPerPiece } = decimate(time, values, { from: first, to: Math.max(end, first + 1), pieces, gapsBefore })
      return { signal, unit: unitOfSignal(signal, stored), drawn: { x, y }, rowsPerPiece }
    })
  return { from: time[first], to: time[Math.max(first, end - 1)], rows: end - first, rowsPerPoint: drawn[0]?.rowsPerPiece ?? 1, series: drawn.map(({ rowsPerPiece: _, ...s }) => s) }
}
