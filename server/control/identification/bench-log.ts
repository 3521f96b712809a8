/** A bench log as numbers, looked over before anything is computed from it. */
import { NumericError } from '../errors.ts'

/** Columns in SI, output-referred, all of one length. `time` and `current` are always there. */
export interface BenchLog {
  /** s, rising. */
  time: Float64Array
  /** In the unit of the mode that was closed: rad, rad/s or A. */
  set_point?: Float64Array
  position?: Float64Array
  speed?: Float64Array
  current: Float64Array
  /** On the motor from this row to the next (its mean where the log is slower than the current task), V. */
  voltage?: Float64Array
  /** Share of the bus voltage, −1 … 1; taken when there is no voltage. */
  duty?: Float64Array
}

/** A log that passed, its repairs stated. */
export interface CheckedLog {
  log: BenchLog
  /** Median spacing of the rows, s. */
  dt: number
  /** Row ranges [from, to) without a gap between. */
  stretches: { from: number; to: number }[]
  /** What was put right, one sentence each; empty when nothing was. */
  repairs: string[]
}

export const MAX_ROWS = 1_000_000
export const MIN_ROWS = 50
/** Rows farther apart than this many median spacings are a gap. */
const GAP = 3
/** Slowest log that still shows a joint's motion, Hz. */
const MIN_RATE = 100

const COLUMNS = ['set_point', 'position', 'speed', 'current', 'voltage', 'duty'] as const

/**
 * Guards a log: finite, rising, long and fast enough, in SI; drops repeated rows and splits at gaps.
 *
 * @throws NumericError bad-input, not-finite, too-large (each names the column and row)
 */
export function checkLog(log: BenchLog): CheckedLog {
  const rows = log.time.length
  if (rows > MAX_ROWS) refuse('too-large', 'time', rows, `The log has ${rows} rows, more than ${MAX_ROWS}; nothing was computed. Cut it or log more slowly.`)
  if (rows < MIN_ROWS) refuse('bad-input', 'time', rows, `The log has ${rows} rows, fewer than ${MIN_ROWS}; nothing was computed. Log a longer run.`)
  for (const name of ['time', ...COLUMNS] as const) {
    const column = log[name]
    if (column === undefined) continue
    if (column.length !== rows) refuse('bad-input', name, column.length, `Column ${name} has ${column.length} values for ${rows} times; nothing was computed.`)
    for (let k = 0; k < rows; k++) {
      if (!Number.isFinite(column[k])) refuse('not-finite', name, column[k], `Column ${name}, row ${k + 1}, is no finite number; nothing was computed. Remove the row or export the log again.`)
    }
  }
  const repairs: string[] = []
  const kept = withoutRepeats(log, repairs)
  const time = kept.time
  const dt = medianSpacing(time)
  if (dt > 1 / MIN_RATE) {
    refuse('bad-input', 'time', dt, `Rows are ${dt} s apart: too slow for a joint's motion, or times in ms taken for s. Nothing was computed. Log at ${MIN_RATE} Hz or more, or give the unit.`)
  }
  const stretches = split(time, dt, repairs)
  noteJitter(time, dt, stretches, repairs)
  const checked = { log: kept, dt, stretches, repairs }
  checkSpeedUnit(checked)
  return checked
}

function refuse(code: 'bad-input' | 'not-finite' | 'too-large', field: string, value: unknown, text: string): never {
  throw new NumericError(code, { field: `log.${field}`, value, text })
}

function withoutRepeats(log: BenchLog, repairs: string[]): BenchLog {
  const { time } = log
  const keep: number[] = []
  for (let k = 0; k < time.length; k++) {
    const last = keep.length > 0 ? time[keep[keep.length - 1]] : -Infinity
    if (time[k] > last) keep.push(k)
    else if (time[k] < last) refuse('bad-input', 'time', time[k], `Time runs backwards at row ${k + 1}; nothing was computed. Sort the log, or cut it into its runs.`)
  }
  const dropped = time.length - keep.length
  if (dropped === 0) return log
  repairs.push(`${dropped} rows repeated the time of the row before and were left out.`)
  if (keep.length < MIN_ROWS) refuse('bad-input', 'time', keep.length, `Only ${keep.length} rows have times of their own, fewer than ${MIN_ROWS}; nothing was computed.`)
  const pick = (column: Float64Array): Float64Array => Float64Array.from(keep, (k) => column[k])
  const out: BenchLog = { time: pick(time), current: pick(log.current) }
  for (const name of COLUMNS) {
    const column = log[name]
    if (column !== undefined) out[name] = pick(column)
  }
  return out
}

function medianSpacing(time: Float64Array): number {
  const spacing = new Float64Array(time.length - 1)
  for (let k = 0; k < spacing.length; k++) spacing[k] = time[k + 1] - time[k]
  spacing.sort()
  return spacing[spacing.length >> 1]
}

function split(time: Float64Array, dt: number, repairs: string[]): CheckedLog['stretches'] {
  const stretches: CheckedLog['stretches'] = []
  let from = 0
  for (let k = 1; k <= time.length; k++) {
    if (k < time.length && time[k] - time[k - 1] <= GAP * dt) continue
    stretches.push({ from, to: k })
    from = k
  }
  if (stretches.length > 1) repairs.push(`${stretches.length - 1} gaps of more than ${GAP} rows split the log; nothing was filled in.`)
  return stretches
}

function noteJitter(time: Float64Array, dt: number, stretches: CheckedLog['stretches'], repairs: string[]): void {
  let jitter = 0
  for (const { from, to } of stretches) {
    for (let k = from + 1; k < to; k++) jitter = Math.max(jitter, Math.abs(time[k] - time[k - 1] - dt) / dt)
  }
  if (jitter > 0.2) repairs.push(`Row spacing varies by up to ${Math.round(100 * jitter)} % of its median; the stated times were used.`)
}

const SPEED_UNITS: readonly (readonly [string, number])[] = [
  ['degrees per second', 180 / Math.PI],
  ['revolutions per minute', 30 / Math.PI],
  ['thousandths of a rad/s', 1000],
]

/** The speed column against the position's own slope: a plain factor between them is a unit taken for another. */
function checkSpeedUnit({ log, stretches }: CheckedLog): void {
  const { time, position, speed } = log
  if (position === undefined || speed === undefined) return
  let both = 0
  let own = 0
  let given = 0
  for (const { from, to } of stretches) {
    // Wide differences, so that neither counts nor the estimate's lag decide.
    const span = Math.max(1, Math.min(200, (to - from) >> 3))
    let integral = 0
    let start = from
    for (let k = from + 1; k < to; k++) {
      integral += 0.5 * (speed[k] + speed[k - 1]) * (time[k] - time[k - 1])
      if (k - start < span) continue
      const moved = position[k] - position[start]
      both += moved * integral
      own += moved * moved
      given += integral * integral
      integral = 0
      start = k
    }
  }
  // Only where the two agree but for a factor: correlation above 0.99.
  if (own === 0 || given === 0 || both < 0.99 * Math.sqrt(own * given)) return
  const ratio = Math.sqrt(given / own)
  for (const [unit, factor] of SPEED_UNITS) {
    if (Math.abs(ratio / factor - 1) < 0.03) {
      refuse('bad-input', 'speed', ratio, `The speed column is ${ratio.toFixed(2)} times the slope of the position: it seems to be in ${unit}. Nothing was computed. Give the unit.`)
    }
  }
}
