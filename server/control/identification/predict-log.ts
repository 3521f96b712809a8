/** What the model would have done with a log's own set-point, beside what was measured. */
import { NumericError } from '../errors.ts'
import type { JointModel } from '../model.ts'
import { encoderCount } from '../plant.ts'
import { simulateEveryTick } from '../simulation/simulate.ts'
import { checkLog } from './bench-log.ts'
import type { BenchLog, CheckedLog } from './bench-log.ts'

export type PredictedSignal = 'position' | 'speed' | 'current' | 'voltage'

export interface Comparison {
  signal: PredictedSignal
  measured: Float64Array
  predicted: Float64Array
  /** Root mean square of their difference over the measured span; null where the measured signal does not move. */
  normalisedRmsError: number | null
  rmsError: number
}

export interface LogPrediction {
  /** s from the log's first row; one value a row, as the signals. */
  time: Float64Array
  set_point: Float64Array
  comparisons: Comparison[]
  /** row ranges [from, to) without a gap between */
  stretches: CheckedLog['stretches']
  repairs: string[]
  /** The log does not begin at rest, as the model does: speed (rad/s) or current (A) at its first row. */
  startsMoving: boolean
}

export interface PredictOptions {
  tau_load?: number
  backlash?: number
  source_resistance?: number
}

/**
 * Simulates the joint on the log's own set-point from the log's first position.
 *
 * @returns  each logged signal beside its prediction at the log's rows, errors over all rows
 * @throws   NumericError bad-input when the log has no set-point; those of checkLog and simulate
 * @source   control-model.md §6
 */
export function predictLog(model: JointModel, log: BenchLog, options: PredictOptions = {}): LogPrediction {
  const checked = checkLog(log)
  const { time, set_point, position, speed, current } = checked.log
  if (set_point === undefined) {
    throw new NumericError('bad-input', { field: 'log.set_point', text: 'The log has no set-point column, so there is nothing to predict from; nothing was computed. Log the set-point too.' })
  }
  const start = time[0]
  const times = time.map((t) => t - start)
  const { record } = simulateEveryTick(model, {
    profile: 'samples',
    times,
    values: set_point,
    theta_0: startAngle(position?.[0] ?? 0, encoderCount(model.plant)),
    t_end: times[times.length - 1] + 2 / model.firmware.f_c,
    encoder_quantised: true,
    current_quantised: true,
    tau_load: options.tau_load ?? 0,
    backlash: options.backlash ?? 0,
    source_resistance: options.source_resistance ?? 0,
  })
  const at = (samples: Float64Array, held: boolean): Float64Array =>
    times.map((t) => {
      const x = Math.min(t / record.T_c, record.count - 1)
      const k = Math.min(Math.floor(x + 1e-6), record.count - 1)
      if (held || k + 1 >= record.count) return samples[k]
      return samples[k] + Math.max(0, x - k) * (samples[k + 1] - samples[k])
    })
  const comparisons: Comparison[] = []
  const compare = (signal: PredictedSignal, measured: Float64Array | undefined, samples: Float64Array, held: boolean): void => {
    if (measured !== undefined) comparisons.push(comparison(signal, measured, at(samples, held)))
  }
  compare('position', position, record.theta, false)
  compare('speed', speed, record.omega, false)
  compare('current', current, record.i, false)
  const duty = checked.log.duty?.map((d) => d * model.environment.V_bus)
  compare('voltage', checked.log.voltage ?? duty, meanFrom(record.v, checked.dt / record.T_c), true)
  const spanOfSpeed = Math.max(...comparisons.filter((c) => c.signal === 'speed').map((c) => spanOf(c.measured)), 0)
  return {
    time: times,
    set_point,
    comparisons,
    stretches: checked.stretches,
    repairs: checked.repairs,
    startsMoving: Math.abs(speed?.[0] ?? 0) > 0.05 * spanOfSpeed || Math.abs(current[0]) > 0.2 * spanOf(current),
  }
}

/** A counted position stands for anything up to the next count: the middle is the best guess, and no edge for rounding to fall off. */
function startAngle(position: number, count: number): number {
  const counts = position / count
  return Math.abs(counts - Math.round(counts)) < 1e-6 ? position + count / 2 : position
}

/** Mean of the held samples over one row from each tick on, rows being `ticks` long. */
function meanFrom(samples: Float64Array, ticks: number): Float64Array {
  const length = Math.max(1, Math.round(ticks))
  const sums = new Float64Array(samples.length + 1)
  for (let k = 0; k < samples.length; k++) sums[k + 1] = sums[k] + samples[k]
  return samples.map((_, k) => {
    const end = Math.min(samples.length, k + length)
    return (sums[end] - sums[k]) / (end - k)
  })
}

function comparison(signal: PredictedSignal, measured: Float64Array, predicted: Float64Array): Comparison {
  let squares = 0
  for (let k = 0; k < measured.length; k++) squares += (measured[k] - predicted[k]) ** 2
  const rmsError = Math.sqrt(squares / measured.length)
  const span = spanOf(measured)
  return { signal, measured, predicted, rmsError, normalisedRmsError: span > 0 ? rmsError / span : null }
}

function spanOf(column: Float64Array): number {
  let [low, high] = [Infinity, -Infinity]
  for (let k = 0; k < column.length; k++) {
    if (column[k] < low) low = column[k]
    if (column[k] > high) high = column[k]
  }
  return high - low
}
