import type { LoopName, ToleranceBound, Verdict, VertexLoop } from '../../../shared/contract/checks.ts'
import type { JointModel } from '../../control/model.ts'
import { parameterNamed, valueOf, withValues } from '../../control/parameters.ts'
import { pointEvaluator, type LoopPoint } from '../../control/point.ts'
import { latinHypercube } from '../../control/random.ts'
import { sampleJoint } from '../../control/sampled-joint.ts'
import { rankBySensitivity } from '../../control/sensitivity.ts'
import { timingOf } from '../../control/timing.ts'
import { VERTEX_BOUNDS_LIMIT } from '../../control/tolerance.ts'
import { verdict, verdictOfSampled } from '../../control/verdict.ts'
import { verdictWords } from './linear-figures.ts'

/** Of the Latin hypercube: any number, the same for ever. */
const seed = 20260302

/** Samples at which margins are computed too; at the rest the verdict alone, for a tenth of the cost. */
export const samplesWithMargins = 64

/** A sweep as laid out before it runs: vertices first, then samples. */
export interface SweepPlan {
  model: JointModel
  bounds: readonly ToleranceBound[]
  vertexNames: readonly string[]
}

export interface SweepPoint {
  rho: number
  verdict: Verdict
  loops: Partial<Record<LoopName, VertexLoop>>
}

export const vertexCount = (plan: Pick<SweepPlan, 'vertexNames'>) => 2 ** plan.vertexNames.length
/** §5: 256 samples, 1024 with more than ten bounds. */
export const sampleCount = (bounds: readonly ToleranceBound[]) => (bounds.length > VERTEX_BOUNDS_LIMIT ? 1024 : 256)
/** Vertices and samples of a box, before it is known which bounds make the vertices. */
export const pointCount = (bounds: readonly ToleranceBound[]) => 2 ** Math.min(bounds.length, VERTEX_BOUNDS_LIMIT) + sampleCount(bounds)

export interface SweepLayout {
  vertexNames: string[]
  /** time constant at nominal values, s; null where nothing decays */
  slowest: number | null
}

/** What must be known before a sweep's points: which bounds make its vertices, and how long its steps are to run. @throws NumericError */
export function layOut(model: JointModel, bounds: readonly ToleranceBound[]): SweepLayout {
  const { rho } = verdict(model)
  const { T_h } = timingOf(model.firmware.f_c, model.firmware.f_o)
  return { vertexNames: vertexNamesOf(model, bounds), slowest: rho < 1 ? -T_h / Math.log(rho) : null }
}

/** The bounds that make the vertices: all, or of more than ten those to which ρ and the margins are most sensitive. */
function vertexNamesOf(model: JointModel, bounds: readonly ToleranceBound[]): string[] {
  const all = bounds.map((b) => b.name)
  if (all.length <= VERTEX_BOUNDS_LIMIT) return all
  const ranked = rankBySensitivity(model, all.map(parameterNamed), Float64Array.from(bounds, (b) => b.low), Float64Array.from(bounds, (b) => b.high), true)
  const chosen = new Set<string>(ranked.slice(0, VERTEX_BOUNDS_LIMIT).map((s) => s.name))
  return all.filter((name) => chosen.has(name))
}

/** Values at the points `from` to `from + count` of a sweep. Bit j of a vertex's index is set where the j-th of the vertex names stands at its high bound. */
export function valuesOfPoints({ model, bounds, vertexNames }: SweepPlan, from: number, count: number): Record<string, number>[] {
  const vertices = vertexCount({ vertexNames })
  const samples = sampleCount(bounds)
  const cube = from + count > vertices ? latinHypercube(samples, bounds.length, seed) : null
  return Array.from({ length: count }, (_, k) => {
    const index = from + k
    const sample = index - vertices
    return Object.fromEntries(
      bounds.map((b, column) => {
        if (sample >= 0) return [b.name, b.low + cube![sample * bounds.length + column] * (b.high - b.low)]
        const bit = vertexNames.indexOf(b.name)
        return [b.name, bit < 0 ? valueOf(model, parameterNamed(b.name)) : Math.floor(index / 2 ** bit) % 2 === 1 ? b.high : b.low]
      }),
    )
  })
}

/** A joint at a point of its tolerance box; k_e moves with k_t. */
export const modelAt = (model: JointModel, values: Readonly<Record<string, number>>): JointModel => {
  const names = Object.keys(values)
  return withValues(model, names.map(parameterNamed), names.map((n) => values[n]))
}

const loopOf = (loop: LoopPoint): VertexLoop => ({
  verdict: verdictWords[loop.verdict],
  phaseMarginDeg: loop.phase.kind === 'margin' ? loop.phase.phaseMarginDeg : null,
  gainMarginDb: loop.gainUp.kind === 'margin' ? loop.gainUp.gainMarginDb : null,
})

/** Evaluates points of a sweep: margins at every vertex and at the first samples, ρ at all. @throws NumericError */
export function sweepPoints(plan: SweepPlan, from: number, count: number): SweepPoint[] {
  const withMargins = vertexCount(plan) + samplesWithMargins
  const { model, bounds } = plan
  const names = bounds.map((b) => parameterNamed(b.name))
  const [rhoAlone, all] = [pointEvaluator(model, names, false), pointEvaluator(model, names, true)]
  // Every point starts from the nominal joint's root, so that its figures depend on no other.
  const root = { re: 1, im: 0 }
  verdictOfSampled(sampleJoint(model), null, root)
  const known = new Map<string, SweepPoint>()
  return valuesOfPoints(plan, from, count).map((values, k) => {
    const margins = from + k < withMargins
    // A compensated supply is no part of the linear loop: corners that differ in it alone are one.
    const key = JSON.stringify({ ...values, V_bus: model.firmware.supply_compensated ? 0 : values.V_bus, margins })
    const before = known.get(key)
    if (before) return before
    const point = (margins ? all : rhoAlone)(names.map((n) => values[n]), { ...root })
    const result = { rho: point.rho, verdict: verdictWords[point.verdict], loops: Object.fromEntries(Object.entries(point.loops).map(([name, loop]) => [name, loopOf(loop)])) }
    known.set(key, result)
    return result
  })
}
