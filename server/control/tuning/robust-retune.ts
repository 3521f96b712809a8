/** A bounded search for gains whose worst margin over a tolerance box is largest, with the bandwidth and current kept. */
import { NumericError } from '../errors.ts'
import type { ControlMode, Firmware, JointModel } from '../model.ts'
import { guardInteger, guardNumber, validateJointModel } from '../model.ts'
import { parameterNamed, withValues } from '../parameters.ts'
import type { ParameterName } from '../parameters.ts'
import { seededRandom } from '../random.ts'
import type { ToleranceBox } from '../tolerance.ts'
import { better, score, vertexValues, worth } from './retune-score.ts'
import type { Judgement, MarginUnits, RetuneConstraints, RetuneScore } from './retune-score.ts'

export const GAIN_NAMES = ['K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic'] as const
export type GainName = (typeof GAIN_NAMES)[number]
export type Gains = Partial<Record<GainName, number>>

export interface RetuneOptions {
  /** Gains that may move, each between these multiples of its present value. */
  gains: Partial<Record<GainName, readonly [number, number]>>
  /** Bounds of the plant and environment; at most ten, k_e follows k_t. */
  box: ToleranceBox
  constraints: RetuneConstraints
  /** Margins that count as 1: 45° and 8 dB by default. */
  units?: MarginUnits
  /** Most sets of gains tried; 300 by default. */
  tries?: number
  seed: number
}

export interface RetuneProgress {
  tried: number
  tries: number
  best: Gains
  bestScore: RetuneScore
}

export interface RetuneResult extends RetuneProgress {
  before: RetuneScore
  /** `no better`: the present gains are the best found. */
  outcome: 'better' | 'no better'
  /** Why the search ended. */
  ended: 'converged' | 'tries used up'
}

const MAX_TRIES = 20_000
const MAX_BOUNDS = 10
/** Steps in ln(gain): first, and where the search has converged. */
const FIRST_STEP = 0.25
const LAST_STEP = 0.004

/**
 * Pattern search in the logarithms of the gains, polling along seeded random orthogonal directions.
 *
 * A trial is scored on the vertices that have been worst so far; only one that beats the best there is scored on all of
 * them, and a vertex that then proves worse joins the set. Yields after every trial, so that a worker can report
 * progress and stop; the result is a proposal, nothing is applied.
 *
 * @param model    the joint with its present gains
 * @throws         NumericError bad-input, out-of-range, bounds-crossed, too-large, unknown-parameter
 * @accuracy       the returned score is the full one over all vertices; a local optimum to 0.4 % of the gains
 * @source         control-model.md §4, §5; T. Kolda et al., SIAM Review 45 (2003), direct search (from memory)
 */
export function* robustRetune(model: JointModel, options: RetuneOptions): Generator<RetuneProgress, RetuneResult, void> {
  const search = prepare(model, options)
  const { names, low, high, box, allVertices, judgement, tries } = search
  const random = seededRandom(options.seed)
  const gainsAt = (x: Float64Array): Gains => Object.fromEntries(names.map((name, k) => [name, Math.exp(x[k])]))
  const withGains = (x: Float64Array): JointModel => ({ ...model, firmware: { ...model.firmware, ...gainsAt(x) } })
  const full = (x: Float64Array, stopBelow = -Infinity): RetuneScore => score(withGains(x), box, allVertices, judgement, stopBelow)

  let best = Float64Array.from(names, (name) => Math.log(model.firmware[name]))
  const before = full(best)
  let bestScore = before
  const critical = new Set(worstVertices(before))
  let tried = 1
  const progress = (): RetuneProgress => ({ tried, tries, best: gainsAt(best), bestScore })
  yield progress()

  let step = FIRST_STEP
  while (step >= LAST_STEP && tried < tries) {
    let moved = false
    for (const direction of directions(names.length, random)) {
      if (tried >= tries) break
      const x = best.map((value, k) => Math.min(high[k], Math.max(low[k], value + step * direction[k])))
      if (x.every((value, k) => value === best[k])) continue
      tried++
      const quick = score(withGains(x), box, [...critical], judgement, worth(bestScore))
      if (better(quick, bestScore)) {
        const trial = full(x, worth(bestScore))
        for (const vertex of worstVertices(trial)) critical.add(vertex)
        if (better(trial, bestScore)) {
          best = x
          bestScore = trial
          moved = true
        }
      }
      yield progress()
      if (moved) break
    }
    step *= moved ? 1.5 : 0.5
    step = Math.min(step, FIRST_STEP)
  }
  return {
    ...progress(),
    before,
    outcome: better(bestScore, before) ? 'better' : 'no better',
    ended: step < LAST_STEP ? 'converged' : 'tries used up',
  }
}

function worstVertices(s: RetuneScore): number[] {
  return Object.values(s.loops).flatMap((loop) => [loop.phaseVertex, loop.gainVertex]).filter((vertex) => vertex >= 0)
}

interface Search {
  names: GainName[]
  low: number[]
  high: number[]
  box: { names: readonly ParameterName[]; bounds: readonly (readonly [number, number])[] }
  allVertices: number[]
  judgement: Judgement
  tries: number
}

/** Loops, innermost first, and where each gain acts: it touches that loop and those outside it. */
const LOOPS: readonly ControlMode[] = ['current', 'velocity', 'position']
const LOOP_OF: Record<GainName, number> = { K_pc: 0, K_ic: 0, K_pv: 1, K_iv: 1, K_pp: 2, K_ip: 2 }

function prepare(model: JointModel, options: RetuneOptions): Search {
  validateJointModel(model)
  const tries = options.tries ?? 300
  guardInteger('tries', tries, 1, MAX_TRIES)
  guardInteger('seed', options.seed, 0, 0xffffffff)
  const units = options.units ?? { phaseMarginDeg: 45, gainMarginDb: 8 }
  guardNumber('units.phaseMarginDeg', units.phaseMarginDeg, 'positive')
  guardNumber('units.gainMarginDb', units.gainMarginDb, 'positive')
  const names = Object.keys(options.gains) as GainName[]
  if (names.length === 0) throw new NumericError('bad-input', { field: 'gains', text: 'No gain may move, so there is nothing to search; nothing was computed. Choose at least one.' })
  const bounds = names.map((name) => gainBounds(model.firmware, name, options.gains[name]))
  const counted = new Set(LOOPS.slice(Math.min(...names.map((name) => LOOP_OF[name]))))
  const boxNames = Object.keys(options.box).map(parameterNamed)
  if (boxNames.length > MAX_BOUNDS) {
    throw new NumericError('too-large', { field: 'box', value: boxNames.length, limit: MAX_BOUNDS, text: `${boxNames.length} bounds make too many vertices for a search; nothing was computed. Keep the ${MAX_BOUNDS} that matter most.` })
  }
  const boxBounds = boxNames.map((name) => options.box[name])
  boxNames.forEach((name, k) => {
    guardNumber(`box.${name}[0]`, boxBounds[k][0], 'any')
    guardNumber(`box.${name}[1]`, boxBounds[k][1], 'any')
    if (boxBounds[k][0] > boxBounds[k][1]) throw new NumericError('bounds-crossed', { field: name, value: boxBounds[k], text: `The bounds of ${name} are crossed: ${boxBounds[k].join(' to ')}. Nothing was computed. Swap or correct them.` })
  })
  const box = { names: boxNames, bounds: boxBounds }
  const allVertices = boxNames.length === 0 ? [] : Array.from({ length: 2 ** boxNames.length }, (_, k) => k)
  // A vertex that is no possible joint is refused before the search, not in its midst.
  for (const vertex of allVertices) validateJointModel(withValues(model, boxNames, vertexValues(boxBounds, vertex)))
  return { names, low: bounds.map((b) => b[0]), high: bounds.map((b) => b[1]), box, allVertices, judgement: { units, counted, constraints: options.constraints }, tries }
}

function gainBounds(firmware: Firmware, name: GainName, factors: readonly [number, number] | undefined): readonly [number, number] {
  if (!GAIN_NAMES.includes(name)) throw new NumericError('unknown-parameter', { field: name, text: `"${name}" is no gain; nothing was computed. Use ${GAIN_NAMES.join(', ')}.` })
  const present = firmware[name]
  if (!(present > 0)) {
    throw new NumericError('out-of-range', { field: name, value: present, text: `${name} is ${present}; a search by ratios needs a gain above 0. Nothing was computed. Give it a starting value or leave it out.` })
  }
  const [least, most] = factors ?? [1, 1]
  guardNumber(`gains.${name}[0]`, least, 'positive')
  guardNumber(`gains.${name}[1]`, most, 'positive')
  if (least > 1 || most < 1) throw new NumericError('out-of-range', { field: `gains.${name}`, value: factors, text: `The range of ${name} must hold its present value: factors from at most 1 to at least 1. Nothing was computed.` })
  return [Math.log(present * least), Math.log(present * most)]
}

/** Both senses of n random orthonormal directions, by Gram and Schmidt. */
function directions(n: number, random: () => number): Float64Array[] {
  const basis: Float64Array[] = []
  for (let k = 0; k < n; k++) {
    const v = Float64Array.from({ length: n }, () => random() - 0.5)
    for (const e of basis) {
      const along = v.reduce((total, value, c) => total + value * e[c], 0)
      for (let c = 0; c < n; c++) v[c] -= along * e[c]
    }
    const length = Math.hypot(...v)
    // A draw that the earlier ones nearly span is replaced by an axis; the set then still polls every sign.
    if (length < 1e-6) v.fill(0).fill(1, k, k + 1)
    else for (let c = 0; c < n; c++) v[c] /= length
    basis.push(v)
  }
  return basis.flatMap((v) => [v, v.map((value) => -value)])
}
