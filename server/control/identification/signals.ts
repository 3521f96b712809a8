/** Signals that a log implies. */
import type { CheckedLog } from './bench-log.ts'
import { decimate } from './decimate.ts'

/** Half-width of the window over which a position's slope is taken, s: wide against counts and a firmware's own ripple. */
const HALF_WINDOW = 4e-3

export interface SpeedSignal {
  /** rad/s at every row. */
  omega: Float64Array
  /** Half-width of the window behind it, rows; 0 for a speed column. */
  half: number
}

/**
 * Output speed at every row: slope of a straight line through the positions within ±4 ms, else the speed column.
 *
 * The position comes first because a firmware's own speed estimate lags by half its window.
 *
 * @param perAmpere  acceleration per ampere where it is known, rad/(s²·A): the motion that the current explains is then
 *                   taken off before the slope and its speed put back after, so that a sudden current leaves no smear
 */
export function speedOf(checked: CheckedLog, perAmpere = 0): SpeedSignal | null {
  const { log, dt } = checked
  if (log.position === undefined) return log.speed === undefined ? null : { omega: log.speed, half: 0 }
  const half = Math.max(2, Math.min(500, Math.round(HALF_WINDOW / dt)))
  if (perAmpere === 0) return { omega: slopes(checked, log.position, half), half }
  const { speed, angle } = explained(checked, perAmpere)
  const omega = slopes(checked, log.position.map((theta, k) => theta - angle[k]), half)
  for (let k = 0; k < omega.length; k++) omega[k] += speed[k]
  return { omega, half }
}

/** Speed and angle that the current alone gives from each stretch's start, less its mean so that they do not run away. */
function explained({ log: { time, current }, stretches }: CheckedLog, perAmpere: number): { speed: Float64Array; angle: Float64Array } {
  const speed = new Float64Array(time.length)
  const angle = new Float64Array(time.length)
  for (const { from, to } of stretches) {
    let mean = 0
    for (let k = from; k < to; k++) mean += current[k] / (to - from)
    for (let k = from + 1; k < to; k++) {
      const h = time[k] - time[k - 1]
      const [before, now] = [perAmpere * (current[k - 1] - mean), perAmpere * (current[k] - mean)]
      speed[k] = speed[k - 1] + (h * (before + now)) / 2
      angle[k] = angle[k - 1] + h * speed[k - 1] + h * h * (before / 3 + now / 6)
    }
  }
  return { speed, angle }
}

function slopes({ log: { time }, stretches }: CheckedLog, position: Float64Array, halfWindow: number): Float64Array {
  const speed = new Float64Array(position.length)
  for (const { from, to } of stretches) {
    const n = to - from
    // Running sums about the stretch's start; differences of them give each window's line.
    const [T, X, TX, TT] = [0, 1, 2, 3].map(() => new Float64Array(n + 1))
    for (let k = 0; k < n; k++) {
      const t = time[from + k] - time[from]
      const x = position[from + k] - position[from]
      T[k + 1] = T[k] + t
      X[k + 1] = X[k] + x
      TX[k + 1] = TX[k] + t * x
      TT[k + 1] = TT[k] + t * t
    }
    for (let k = 0; k < n; k++) {
      const half = Math.max(1, Math.min(halfWindow, k, n - 1 - k))
      const a = Math.max(0, k - half)
      const b = Math.min(n, k + half + 1)
      const t = T[b] - T[a]
      const spread = (b - a) * (TT[b] - TT[a]) - t * t
      speed[from + k] = spread > 0 ? ((b - a) * (TX[b] - TX[a]) - t * (X[b] - X[a])) / spread : 0
    }
  }
  return speed
}

/** Voltage held from each row, V: the column itself, or duty times the bus voltage. Null when the log has neither. */
export function voltageOf({ log }: CheckedLog, V_bus: number | undefined): Float64Array | null {
  if (log.voltage !== undefined) return log.voltage
  if (log.duty === undefined || V_bus === undefined) return null
  return log.duty.map((d) => d * V_bus)
}

/** A residual to plot: at most about 2000 of its points, its peaks among them, and its root mean square over all. */
export interface ResidualSeries {
  time: Float64Array
  value: Float64Array
  rms: number
  /** Correlation of neighbours; near 0 for white noise, near 1 where the model misses something slow. */
  neighbourCorrelation: number
}

/** Collects residuals row by row; `gap` says that the row does not follow the one before. */
export class ResidualCollector {
  private readonly time: number[] = []
  private readonly value: number[] = []
  private squares = 0
  private products = 0
  private last: number | null = null

  add(t: number, r: number, gap: boolean): void {
    this.time.push(t)
    this.value.push(r)
    this.squares += r * r
    if (!gap && this.last !== null) this.products += r * this.last
    this.last = r
  }

  series(): ResidualSeries {
    const n = this.value.length
    const { x, y } = decimate(this.time, this.value, { from: 0, to: n, pieces: 1000 })
    const neighbourCorrelation = this.squares > 0 ? this.products / this.squares : 0
    return { time: Float64Array.from(x), value: Float64Array.from(y as number[]), rms: n > 0 ? Math.sqrt(this.squares / n) : 0, neighbourCorrelation }
  }
}
