/** How good a set of gains is for a robust retune: its worst margin over a tolerance box, and the constraints it keeps. */
import { analyse } from '../analyse.ts'
import type { ControlMode, JointModel } from '../model.ts'
import { withValues } from '../parameters.ts'
import type { ParameterName } from '../parameters.ts'
import { velocityQuantum } from '../plant.ts'
import { evaluatePoint } from '../point.ts'
import { simulate } from '../simulation/simulate.ts'
import type { SimulationOptions } from '../simulation/simulate.ts'

export interface RetuneConstraints {
  /** Least bandwidth of a loop at nominal values, Hz (−3 dB of its value at zero frequency). */
  bandwidthHz?: Partial<Record<ControlMode, number>>
  /** Most current ripple from the velocity quantum, A. */
  quantumRipple?: number
  /** Most peak current in the given run, A. */
  peakCurrent?: { limit: number; run: SimulationOptions }
}

/** Margins that count as 1; a point's worth is the least of its margins in these units. */
export interface MarginUnits {
  phaseMarginDeg: number
  gainMarginDb: number
}

export interface LoopWorst {
  phaseMarginDeg: number
  gainMarginDb: number
  /** Vertices (−1: nominal) where they occur. */
  phaseVertex: number
  gainVertex: number
}

export interface RetuneScore {
  /** Least margin in units over counted loops and vertices; below 0 where some point is not stable (1 − ρ then). */
  worst: number
  /** Sum of relative violations of the constraints; 0 when all are kept. */
  violation: number
  loops: Partial<Record<ControlMode, LoopWorst>>
  bandwidthHz: Partial<Record<ControlMode, number>>
  quantumRipple: number
  peakCurrent: number | null
}

/** What the search may change and what it is judged by. */
export interface Judgement {
  units: MarginUnits
  /** Loops whose margins count: those that the moving gains touch. */
  counted: ReadonlySet<ControlMode>
  constraints: RetuneConstraints
}

/** Higher is better: kept constraints first, then the worst margin. */
export function better(a: RetuneScore, b: RetuneScore): boolean {
  return worth(a) > worth(b)
}

/** One number for the search: violations weigh more than any margin. */
export function worth(score: RetuneScore): number {
  return score.violation > 0 ? -10 - score.violation : score.worst
}

/** Values of a box's vertices: bit j set means the high bound of the j-th name. */
export function vertexValues(bounds: readonly (readonly [number, number])[], index: number): Float64Array {
  return Float64Array.from(bounds, (bound, j) => bound[Math.floor(index / 2 ** j) % 2])
}

/**
 * Scores gains at nominal values and at the given vertices.
 *
 * @param stopBelow  gives up (with what it has) as soon as the worth cannot exceed this
 */
export function score(
  model: JointModel,
  box: { names: readonly ParameterName[]; bounds: readonly (readonly [number, number])[] },
  vertices: readonly number[],
  judgement: Judgement,
  stopBelow = -Infinity,
): RetuneScore {
  const result = nominal(model, judgement.constraints)
  if (worth({ ...result, worst: Infinity }) <= stopBelow) return result
  takePoint(result, model, -1, judgement)
  for (const vertex of vertices) {
    if (worth(result) <= stopBelow) return result
    takePoint(result, withValues(model, box.names, vertexValues(box.bounds, vertex)), vertex, judgement)
  }
  return result
}

function nominal(model: JointModel, constraints: RetuneConstraints): RetuneScore {
  const quantumRipple = velocityQuantum(model.plant, model.firmware).i
  const result: RetuneScore = { worst: Infinity, violation: 0, loops: {}, bandwidthHz: {}, quantumRipple, peakCurrent: null }
  if (constraints.quantumRipple !== undefined) result.violation += excess(quantumRipple, constraints.quantumRipple)
  const wanted = Object.entries(constraints.bandwidthHz ?? {}) as [ControlMode, number][]
  if (wanted.length > 0) {
    const { loops } = analyse(model)
    for (const [loop, least] of wanted) {
      const bandwidth = loops[loop]?.bandwidths?.relative
      const hz = bandwidth?.kind === 'bandwidth' ? bandwidth.hz : bandwidth?.kind === 'none' ? Infinity : 0
      result.bandwidthHz[loop] = hz
      result.violation += Math.max(0, (least - hz) / least)
    }
  }
  if (constraints.peakCurrent !== undefined && result.violation === 0) {
    result.peakCurrent = simulate(model, { ...constraints.peakCurrent.run, trace_points: 0 }).metrics.peakCurrent
    result.violation += excess(result.peakCurrent, constraints.peakCurrent.limit)
  }
  return result
}

function excess(value: number, limit: number): number {
  return Math.max(0, (value - limit) / limit)
}

function takePoint(result: RetuneScore, model: JointModel, vertex: number, { units, counted }: Judgement): void {
  const point = evaluatePoint(model, true)
  if (point.verdict !== 'stable') result.worst = Math.min(result.worst, 1 - point.rho, -1e-9)
  for (const [loop, at] of Object.entries(point.loops) as [ControlMode, NonNullable<(typeof point.loops)[ControlMode]>][]) {
    if (at.verdict !== 'stable') {
      result.worst = Math.min(result.worst, -1e-9)
      continue
    }
    const phase = at.phase.kind === 'margin' ? at.phase.phaseMarginDeg : 180
    const gain = at.gainUp.kind === 'margin' ? at.gainUp.gainMarginDb : 60
    const so = (result.loops[loop] ??= { phaseMarginDeg: Infinity, gainMarginDb: Infinity, phaseVertex: -1, gainVertex: -1 })
    if (phase < so.phaseMarginDeg) Object.assign(so, { phaseMarginDeg: phase, phaseVertex: vertex })
    if (gain < so.gainMarginDb) Object.assign(so, { gainMarginDb: gain, gainVertex: vertex })
    if (counted.has(loop)) result.worst = Math.min(result.worst, phase / units.phaseMarginDeg, gain / units.gainMarginDb)
  }
}
