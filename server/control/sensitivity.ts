import type { JointModel } from './model.ts'
import { valueOf, withValues, type ParameterName } from './parameters.ts'
import { evaluatePoint, type PointResult } from './point.ts'

/** How much a bounded value matters, alone and between its bounds. */
export interface Sensitivity {
  readonly name: ParameterName
  /** Largest change of any figure, each relative to the largest change that any bounded value makes in it; 0 to 1. */
  readonly score: number
}

/**
 * Bounded values ranked by what moving each alone from its low to its high bound does to ρ and the margins.
 *
 * Figures of unlike units are compared by their share of the largest change; ties keep the box's order.
 *
 * @source control-model.md §5
 */
export function rankBySensitivity(model: JointModel, names: readonly ParameterName[], low: Float64Array, high: Float64Array, withMargins: boolean): Sensitivity[] {
  const nominal = names.map((name) => valueOf(model, name))
  const changes = names.map((_, k) => {
    const at = (value: number): Map<string, number> => {
      const values = nominal.slice()
      values[k] = value
      return figures(evaluatePoint(withValues(model, names, values), withMargins))
    }
    const ends = [at(low[k]), at(nominal[k]), at(high[k])]
    const keys = new Set(ends.flatMap((end) => [...end.keys()]))
    const change = new Map<string, number>()
    for (const key of keys) {
      const seen = ends.map((end) => end.get(key)).filter((v) => v !== undefined)
      // A figure that exists at one end only has changed beyond measure.
      change.set(key, seen.length < ends.length ? Infinity : Math.max(...seen) - Math.min(...seen))
    }
    return change
  })
  const largest = new Map<string, number>()
  for (const change of changes) for (const [key, value] of change) if (Number.isFinite(value)) largest.set(key, Math.max(largest.get(key) ?? 0, value))
  const ranked = names.map((name, k) => {
    let score = 0
    for (const [key, value] of changes[k]) {
      const scale = largest.get(key) ?? 0
      score = Math.max(score, value === Infinity ? 1 : scale > 0 ? value / scale : 0)
    }
    return { name, score }
  })
  return ranked.sort((a, b) => b.score - a.score)
}

function figures(point: PointResult): Map<string, number> {
  const out = new Map<string, number>([['rho', point.rho]])
  for (const [closure, loop] of Object.entries(point.loops)) {
    if (loop.phase.kind === 'margin') out.set(`${closure} phase`, loop.phase.phaseMarginDeg)
    if (loop.gainUp.kind === 'margin') out.set(`${closure} gain`, loop.gainUp.gainMarginDb)
    if (loop.delay.kind === 'margin') out.set(`${closure} delay`, loop.delay.delay)
  }
  return out
}
