import type { MapCells, Stretch } from '../../shared/contract/checks.ts'
import type { CurvesResult } from './analyses/curves.ts'
import { gridOf, guardMap } from './analyses/map.ts'
import type { NominalResult } from './analyses/nominal.ts'
import type { RetuneResult } from './analyses/retune.ts'
import type { AnalysisKind, AnalysisRequest, MapInputs, ToleranceInputs } from './analyses/requests.ts'
import { toleranceResult, verticesToRun, type ToleranceResult, type VertexStep } from './analyses/tolerance.ts'
import { modelAt, pointCount, valuesOfPoints, vertexCount, type SweepPlan, type SweepPoint } from './analyses/tolerance-points.ts'
import { perform, type Outcome, type Task, type TaskResult } from './task.ts'

export interface AnalysisResults {
  nominal: NominalResult
  tolerance: ToleranceResult
  curves: CurvesResult
  map: MapCells
  stretches: Stretch[]
  retune: RetuneResult
}
export type AnalysisResult = AnalysisResults[AnalysisKind]

/** How a flow has its tasks done, and tells how far it is. */
export interface FlowSite {
  /** does a task somewhere; throws Refused where its inputs can't be computed */
  run<T extends Task>(task: T): Promise<TaskResult<T>>
  /** further units of work are done */
  advance(units: number): void
  /** tasks worth having under way at once */
  width: number
  /** milliseconds from any start; only the sizes of pieces follow from it, never a result */
  clock(): number
}

/** The inputs of an analysis can't be computed: a result like any other, and stored. */
export class Refused extends Error {
  readonly outcome: Outcome<never> & { kind: 'refused' }
  constructor(outcome: Outcome<never> & { kind: 'refused' }) {
    super(outcome.text)
    this.outcome = outcome
  }
}

/** How long a piece should take, ms: short enough to stop soon and let others in, long enough to be worth the way to a thread. */
const pieceMs = 60

/** Work of `total` things of so many units each in pieces, as many at once as the site likes; sizes follow from how long the pieces before took. */
async function inPieces<R>(site: FlowSite, { total, units = 1, first = 8 }: { total: number; units?: number; first?: number }, piece: (from: number, count: number) => Promise<R>): Promise<R[]> {
  const done: { from: number; result: R }[] = []
  let next = 0
  let size = Math.min(first, total)
  const lane = async () => {
    while (next < total) {
      const from = next
      const count = Math.min(size, total - from)
      next += count
      const start = site.clock()
      const result = await piece(from, count)
      const each = (site.clock() - start) / count
      size = Math.max(1, Math.min(256, Math.round(pieceMs / Math.max(each, 0.05))))
      done.push({ from, result })
      site.advance(count * units)
    }
  }
  await Promise.all(Array.from({ length: site.width }, lane))
  return done.sort((a, b) => a.from - b.from).map((d) => d.result)
}

async function tolerance(inputs: ToleranceInputs, site: FlowSite): Promise<ToleranceResult> {
  const { model, bounds, step } = inputs
  const { vertexNames, slowest } = await site.run({ kind: 'lay out', plan: { model, bounds } })
  const plan: SweepPlan = { model, bounds, vertexNames }
  const pieces = await inPieces<SweepPoint[]>(site, { total: pointCount(bounds) }, (from, count) => site.run({ kind: 'points', plan, from, count }))
  const points = pieces.flat()
  const vertices = points.slice(0, vertexCount(plan))
  const values = valuesOfPoints(plan, 0, vertices.length)
  const steps = await Promise.all(
    verticesToRun(vertices).map(async (index): Promise<VertexStep> => ({ index, ...(await site.run({ kind: 'step', model: modelAt(model, values[index]), step, slowest })) })),
  )
  return toleranceResult(inputs, plan, points, steps)
}

async function map(inputs: MapInputs, site: FlowSite): Promise<MapCells> {
  guardMap(inputs)
  const { width, rows } = gridOf(inputs)
  const pieces = await inPieces(site, { total: rows, units: width, first: 1 }, (from, count) => site.run({ kind: 'rows', inputs, from, count }))
  return {
    verdicts: pieces.flatMap((p) => p.verdicts),
    rho: pieces.flatMap((p) => p.rho),
    phaseMarginDeg: pieces.flatMap((p) => p.phaseMarginDeg),
    gainMarginDb: pieces.flatMap((p) => p.gainMarginDb),
  }
}

const single = async <T extends Extract<Task, { kind: 'nominal' | 'curves' | 'stretches' | 'retune' }>>(task: T, site: FlowSite) => {
  const result = await site.run(task)
  if (task.kind !== 'retune') site.advance(1)
  return result
}

/** Units of work in an analysis. */
export function unitsOf(asked: AnalysisRequest): number {
  if (asked.kind === 'tolerance') return pointCount(asked.inputs.bounds)
  if (asked.kind === 'retune') return asked.inputs.tries
  if (asked.kind !== 'map') return 1
  const { width, rows } = gridOf(asked.inputs)
  return width * rows
}

/** Computes an analysis from its tasks. @throws Refused; whatever the site throws when a task is stopped or lost */
export function flow(asked: AnalysisRequest, site: FlowSite): Promise<AnalysisResult> {
  switch (asked.kind) {
    case 'nominal':
      return single({ kind: 'nominal', inputs: asked.inputs }, site)
    case 'curves':
      return single({ kind: 'curves', inputs: asked.inputs }, site)
    case 'stretches':
      return single({ kind: 'stretches', inputs: asked.inputs }, site)
    case 'tolerance':
      return tolerance(asked.inputs, site)
    case 'map':
      return map(asked.inputs, site)
    case 'retune':
      return single({ kind: 'retune', inputs: asked.inputs }, site)
  }
}

/** A flow all in the calling thread, at once: for the command line. */
export async function computeHere(asked: AnalysisRequest): Promise<Outcome<AnalysisResult>> {
  const site: FlowSite = {
    run: async (task) => {
      const outcome = perform(task)
      if (outcome.kind === 'refused') throw new Refused(outcome)
      return outcome.result
    },
    advance: () => {},
    width: 1,
    clock: () => 0,
  }
  try {
    return { kind: 'result', result: await flow(asked, site) }
  } catch (error) {
    if (error instanceof Refused) return error.outcome
    throw error
  }
}
