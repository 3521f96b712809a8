import type { Stretch } from '../../../shared/contract/checks.ts'
import { NumericError } from '../../control/errors.ts'
import { parameterNamed } from '../../control/parameters.ts'
import { pointEvaluator } from '../../control/point.ts'
import { axisValues, LOG_RATIO } from '../../control/stability-map.ts'
import type { StretchInputs } from './requests.ts'

/** Points looked at along a ruler: one every few pixels of it. */
const POINTS = 25
/** Halvings of the gap between a stable and an unstable point: an edge is known to a few thousandths of the ruler. */
const HALVINGS = 7

const counted = new Set(['W', 'D'])

/**
 * Where along one value the joint is not stable, all else as the model has it.
 *
 * Looks at POINTS values by ρ alone and halves the gap at each edge; a stretch narrower than a gap may be missed, as on the map. A value that is no joint
 * counts with its neighbour.
 *
 * @returns  ascending, SI, each edge on the unstable side
 * @throws   NumericError unknown-parameter, bounds-crossed, not-finite
 */
export function unstableStretches({ model, parameter, low, high }: StretchInputs): Stretch[] {
  const name = parameterNamed(parameter)
  const evaluate = pointEvaluator(model, [name], false)
  const unstable = (value: number): boolean | null => {
    try {
      return evaluate([value], { re: 1, im: 0 }).verdict === 'unstable'
    } catch (error) {
      if (error instanceof NumericError) return null
      throw error
    }
  }
  const whole = counted.has(parameter)
  const spaced = Array.from(axisValues(parameter, { parameter, low, high, count: POINTS }))
  const values = whole ? [...new Set(spaced.map(Math.round))] : spaced
  const between = (a: number, b: number) => (low > 0 && high / low > LOG_RATIO ? Math.sqrt(a * b) : (a + b) / 2)
  const edge = (bad: number, good: number): number => {
    if (whole) return wholeEdge(bad, good, unstable)
    let [u, s] = [bad, good]
    for (let k = 0; k < HALVINGS; k += 1) {
      const middle = between(u, s)
      if (unstable(middle) === true) u = middle
      else s = middle
    }
    return u
  }
  const stretches: Stretch[] = []
  let before = null as { value: number; bad: boolean } | null
  for (const value of values) {
    const bad: boolean = unstable(value) ?? before?.bad ?? false
    if (bad && before?.bad) stretches[stretches.length - 1].to = value
    else if (bad) stretches.push({ from: before ? edge(value, before.value) : value, to: value })
    else if (before?.bad) stretches[stretches.length - 1].to = edge(before.value, value)
    before = { value, bad }
  }
  return stretches
}

/** The last whole number on the unstable side. */
function wholeEdge(bad: number, good: number, unstable: (value: number) => boolean | null): number {
  let [u, s] = [bad, good]
  while (Math.abs(u - s) > 1) {
    const middle = Math.round((u + s) / 2)
    if (unstable(middle) === true) u = middle
    else s = middle
  }
  return u
}
