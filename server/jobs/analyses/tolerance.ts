import type { Corner, LoopName, PointCount, StepFigures, StepTraces, ToleranceFigures, VertexLoop, Verdict, WorstFigure } from '../../../shared/contract/checks.ts'
import type { ToleranceInputs } from './requests.ts'
import { sampleCount, samplesWithMargins, valuesOfPoints, vertexCount, type SweepPlan, type SweepPoint } from './tolerance-points.ts'

/** A vertex; its values follow from the index, the bounds and the vertex names. */
export interface StoredVertex {
  index: number
  rho: number
  verdict: Verdict
  loops: Partial<Record<LoopName, VertexLoop>>
}

export interface ToleranceResult {
  figures: ToleranceFigures
  vertices: StoredVertex[]
  /** the step at the worst vertex */
  traces: StepTraces | null
}

/** The step as run at a vertex. */
export interface VertexStep {
  index: number
  figures: StepFigures
  traces: StepTraces
}

/** Smallest margin of a point's loops, in shares of 45° and 8 dB; −1 where a loop is not stable. Puts vertices in order, judges nothing. */
export function smallestShare(loops: Partial<Record<LoopName, VertexLoop>>): number {
  const shares = Object.values(loops).flatMap((l) => (l.verdict !== 'stable' ? [-1] : [(l.phaseMarginDeg ?? Infinity) / 45, (l.gainMarginDb ?? Infinity) / 8]))
  return Math.min(Infinity, ...shares)
}

/** The corner that speaks for the box: an unstable vertex of the largest ρ, else the one whose smallest margin is the smallest. */
export function worstVertexOf(points: readonly SweepPoint[]): number {
  const badness = (p: SweepPoint) => (p.verdict === 'stable' ? -smallestShare(p.loops) : 1e6 + p.rho)
  return points.reduce((worst, p, k) => (badness(p) > badness(points[worst]) ? k : worst), 0)
}

/** Vertices that the step is run at: the worst, and where each loop's margins are smallest, for the current peaks where damping is least. */
export function verticesToRun(points: readonly SweepPoint[]): number[] {
  const chosen = new Set([worstVertexOf(points)])
  const smallest = (read: (l: VertexLoop) => number | null, loop: LoopName) => {
    let best = -1
    let least = Infinity
    points.forEach((p, k) => {
      const value = p.loops[loop] && read(p.loops[loop])
      if (typeof value === 'number' && value < least) [least, best] = [value, k]
    })
    if (best >= 0) chosen.add(best)
  }
  smallest((l) => l.phaseMarginDeg, 'current')
  smallest((l) => l.phaseMarginDeg, 'velocity')
  return [...chosen].filter((k) => points[k].verdict === 'stable')
}

const count = (points: readonly SweepPoint[]): PointCount => {
  const of = (v: Verdict) => points.filter((p) => p.verdict === v).length
  return { points: points.length, stable: of('stable'), boundary: of('on the boundary'), unstable: of('unstable') }
}

/** Everything a check keeps of a sweep, from its points and the steps run at its vertices. */
export function toleranceResult({ bounds }: ToleranceInputs, plan: SweepPlan, points: readonly SweepPoint[], steps: readonly VertexStep[]): ToleranceResult {
  const vertices = vertexCount(plan)
  const values = valuesOfPoints(plan, 0, points.length)
  const corner = (k: number): Corner => (k < vertices ? { kind: 'vertex', index: k, values: values[k] } : { kind: 'sample', index: k - vertices, values: values[k] })
  const least = (loop: LoopName, read: (l: VertexLoop) => number | null): WorstFigure | null => {
    let worst: WorstFigure | null = null
    points.forEach((p, k) => {
      const value = p.loops[loop] && read(p.loops[loop])
      if (typeof value === 'number' && (worst === null || value < worst.value)) worst = { value, at: corner(k) }
    })
    return worst
  }
  const names = Object.keys(points[0].loops) as LoopName[]
  const largest = points.reduce((worst, p, k) => (p.rho > points[worst].rho ? k : worst), 0)
  const worst = worstVertexOf(points.slice(0, vertices))
  const atWorst = steps.find((s) => s.index === worst)
  const peak = steps.reduce<VertexStep | null>((a, b) => (a === null || b.figures.peakCurrentA > a.figures.peakCurrentA ? b : a), null)
  return {
    figures: {
      bounds,
      vertexNames: [...plan.vertexNames],
      vertices: count(points.slice(0, vertices)),
      samples: count(points.slice(vertices)),
      samplesWithMargins: Math.min(samplesWithMargins, sampleCount(bounds)),
      worstRho: { value: points[largest].rho, at: corner(largest) },
      loops: Object.fromEntries(
        names.map((loop) => [loop, { phaseMarginDeg: least(loop, (l) => l.phaseMarginDeg), gainMarginDb: least(loop, (l) => l.gainMarginDb), unstable: points.filter((p) => p.loops[loop] && p.loops[loop].verdict !== 'stable').length }]),
      ),
      worstVertex: corner(worst),
      stepAtWorst: atWorst?.figures ?? null,
      peakCurrentA: peak && { value: peak.figures.peakCurrentA, at: corner(peak.index) },
      stepsRun: steps.length,
    },
    vertices: points.slice(0, vertices).map((p, index) => ({ index, ...p })),
    traces: atWorst?.traces ?? null,
  }
}
