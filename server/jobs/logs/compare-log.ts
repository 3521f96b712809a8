/** A stretch of a stored log beside what the model would have done. */
import type { ComparisonView, LogSignal } from '../../../shared/contract/evidence.ts'
import type { BenchLog } from '../../control/identification/bench-log.ts'
import { decimate } from '../../control/identification/decimate.ts'
import { predictLog } from '../../control/identification/predict-log.ts'
import { NumericError } from '../../control/errors.ts'
import type { ControlMode, JointModel } from '../../control/model.ts'
import { readStored, unpackColumns, type FileAt } from './columns-file.ts'
import { rowAt, unitOfSignal } from './log-window.ts'
import { benchLogOf } from './read-log.ts'

export interface CompareInputs {
  file: FileAt
  model: JointModel
  /** s; the log's beginning when null */
  from: number | null
  backlash: number
  source_resistance: number
}

/** Current ticks of one prediction: some seconds of computing at most. */
export const mostTicks = 500_000
const pieces = 800
const commanded: Record<ControlMode, string> = { position: 'rad', velocity: 'rad/s', current: 'A' }

export type Compared = Omit<ComparisonView, 'modelOf'>

/** @throws NumericError bad-input for a set-point of another mode; those of predictLog */
export function compareLog({ file, model, from, backlash, source_resistance }: CompareInputs): Compared {
  const stored = unpackColumns(readStored(file))
  const { mode, f_c } = model.firmware
  if (stored.setPointUnit !== '' && stored.setPointUnit !== commanded[mode])
    throw new NumericError('bad-input', { field: 'set-point', text: `The log's set-point is in ${stored.setPointUnit}, but the joint runs in ${mode} mode, which follows ${commanded[mode]}. Nothing was predicted; compare with a change in that mode, or map the set-point to another column.` })
  const whole = benchLogOf(stored)
  const begin = from === null ? 0 : rowAt(whole.time, from)
  const end = rowAt(whole.time, whole.time[Math.min(begin, whole.time.length - 1)] + mostTicks / f_c)
  const part = Object.fromEntries(Object.entries(whole).map(([name, column]) => [name, (column as Float64Array).subarray(begin, end)])) as unknown as BenchLog
  const { time, set_point, comparisons, stretches, repairs, startsMoving } = predictLog(model, part, { backlash, source_resistance })
  const t0 = part.time[0]
  const at = time.map((t) => t + t0)
  const gapsBefore = stretches.slice(1).map((s) => s.from)
  const drawn = (values: Float64Array) => {
    const { x, y } = decimate(at, values, { from: 0, to: at.length, pieces, gapsBefore })
    return { x, y }
  }
  return {
    from: at[0],
    to: at[at.length - 1],
    rows: at.length,
    setPoint: { unit: stored.setPointUnit, drawn: drawn(set_point) },
    signals: comparisons.map((c) => ({
      signal: c.signal, unit: unitOfSignal(c.signal as LogSignal, stored), measured: drawn(c.measured), predicted: drawn(c.predicted), rmsError: c.rmsError, normalisedRmsError: c.normalisedRmsError,
    })),
    repairs: [
      ...repairs,
      ...(end < whole.time.length || begin > 0 ? [`Of the log's ${whole.time.length} rows, ${at.length} from ${at[0].toPrecision(4)} s on were predicted.`] : []),
      ...(startsMoving ? ['The log begins in motion, the model at rest: the first moments differ for that alone.'] : []),
    ],
  }
}
