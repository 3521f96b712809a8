/** Figures read off a sampled response: control-model.md §6, as shared by the simulation, bench logs and published examples. */

/** When something first happened, or that it did not inside the window. */
export type RiseTime = { kind: 'time'; seconds: number } | { kind: 'not reached' }
export type SettlingTime = { kind: 'time'; seconds: number } | { kind: 'does not settle' }

export interface StepMetrics {
  /** Between the first crossings of 10 % and 90 % of the commanded step. */
  riseTime: RiseTime
  /** Largest excursion past the reference, as a fraction of the commanded step; 0 when there is none. */
  overshoot: number
  /** Last entry into the band of ±2 % of the step about the reference. */
  settlingTime: SettlingTime
  /** Reference minus the mean over the last fifth of the window, in the signal's unit. */
  finalError: number
  /** The sample farthest from the start in the step's direction, and its time. */
  peak: number
  peakTime: number
}

export interface StepWindow {
  /** Equally spaced samples from t = 0 on. */
  response: ArrayLike<number>
  /** Sampling period, s. */
  dt: number
  /** Value before the step and the reference after it, in the response's unit. */
  from: number
  to: number
  /** Start of the last fifth, as a sample index; by default 0.8 of the span. */
  lastFifth?: number
  /** Half-width of the settling band as a fraction of the step; 0.02 by default. */
  band?: number
  /** `between samples` interpolates crossings; `whole samples` takes the first sample past them. */
  crossings?: 'between samples' | 'whole samples'
}

/** First sample of the last fifth of `count` equally spaced samples: those at t ≥ 0.8·t_end, to 1e-9 of a period. */
export function lastFifthFrom(count: number, spanInSamples = count - 1): number {
  return Math.max(0, Math.min(count - 1, Math.ceil(0.8 * spanInSamples - 1e-9)))
}

/**
 * Rise time, overshoot, settling time, final error and peak of a step response.
 *
 * One pass forwards for the crossings, one backwards for the last entry into the band; straight lines between samples.
 *
 * @param window  samples with their period (s), the step's start and its reference
 * @returns       times in s; a step of size zero has no rise time and settles at once or not at all
 * @accuracy      linear interpolation: error of a crossing ≤ y″·dt²/8 over the slope there (metrics.test.ts, closed forms)
 * @source        control-model.md §6; vectors/README.md "Nonlinear steps"
 */
export function stepMetrics(window: StepWindow): StepMetrics {
  const { response: y, dt, from, to } = window
  const n = y.length
  const step = to - from
  const whole = window.crossings === 'whole samples'
  const halfBand = (window.band ?? 0.02) * Math.abs(step)
  let peakAt = 0
  for (let k = 1; k < n; k++) if ((y[k] - y[peakAt]) * step > 0) peakAt = k
  const low = firstCrossing(y, from, step, 0.1, whole)
  const high = firstCrossing(y, from, step, 0.9, whole)
  const entry = lastEntry(y, to, halfBand, whole)
  const start = window.lastFifth ?? lastFifthFrom(n)
  let sum = 0
  for (let k = start; k < n; k++) sum += y[k]
  return {
    riseTime: low < 0 || high < 0 || step === 0 ? { kind: 'not reached' } : { kind: 'time', seconds: (high - low) * dt },
    overshoot: step === 0 ? 0 : Math.max(0, (y[peakAt] - to) / step),
    settlingTime: entry < 0 ? { kind: 'does not settle' } : { kind: 'time', seconds: entry * dt },
    finalError: to - sum / (n - start),
    peak: y[peakAt],
    peakTime: peakAt * dt,
  }
}

/** Position, in samples, where `y` first reaches `from + fraction·step`; −1 when it never does. */
function firstCrossing(y: ArrayLike<number>, from: number, step: number, fraction: number, whole: boolean): number {
  const sign = Math.sign(step)
  const level = sign * (from + fraction * step)
  for (let k = 0; k < y.length; k++) {
    const value = sign * y[k]
    if (value < level) continue
    if (whole || k === 0) return k
    const before = sign * y[k - 1]
    return k - 1 + (level - before) / (value - before)
  }
  return -1
}

/** Position, in samples, of the last entry into `to ± halfBand`; 0 when never outside, −1 when outside at the end. */
function lastEntry(y: ArrayLike<number>, to: number, halfBand: number, whole: boolean): number {
  let k = y.length - 1
  while (k >= 0 && Math.abs(y[k] - to) <= halfBand) k--
  if (k < 0) return 0
  if (k === y.length - 1) return -1
  if (whole) return k + 1
  const edge = y[k] > to ? to + halfBand : to - halfBand
  return k + (edge - y[k]) / (y[k + 1] - y[k])
}

/** Largest magnitude of `values`. */
export function peakMagnitude(values: ArrayLike<number>): number {
  let peak = 0
  for (let k = 0; k < values.length; k++) {
    const size = Math.abs(values[k])
    if (size > peak) peak = size
  }
  return peak
}

/** Root mean square of equally spaced samples over their whole span, the square integrated by trapezoids. */
export function rootMeanSquare(values: ArrayLike<number>): number {
  const n = values.length
  if (n < 2) return n === 1 ? Math.abs(values[0]) : 0
  let sum = 0.5 * (values[0] * values[0] + values[n - 1] * values[n - 1])
  for (let k = 1; k < n - 1; k++) sum += values[k] * values[k]
  return Math.sqrt(sum / (n - 1))
}

/** Largest minus smallest of `values[start …]`. */
export function peakToPeak(values: ArrayLike<number>, start: number): number {
  let low = Infinity
  let high = -Infinity
  for (let k = start; k < values.length; k++) {
    if (values[k] < low) low = values[k]
    if (values[k] > high) high = values[k]
  }
  return high >= low ? high - low : 0
}
