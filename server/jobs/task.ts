import type { MapCells, Stretch } from '../../shared/contract/checks.ts'
import type { LogWindow } from '../../shared/contract/evidence.ts'
import { NumericError } from '../control/errors.ts'
import type { IdentificationReport } from '../control/identification/identify.ts'
import type { JointModel } from '../control/model.ts'
import { curvesAnalysis, type CurvesResult } from './analyses/curves.ts'
import { mapRows } from './analyses/map.ts'
import { nominalAnalysis, type NominalResult } from './analyses/nominal.ts'
import type { CurvesInputs, MapInputs, NominalInputs, RetuneInputs, StepInputs, StretchInputs } from './analyses/requests.ts'
import { retuneAnalysis, type RetuneResult } from './analyses/retune.ts'
import { runStep, windowOf, type StepRun } from './analyses/step-response.ts'
import { unstableStretches } from './analyses/stretches.ts'
import { compareLog, type Compared, type CompareInputs } from './logs/compare-log.ts'
import { identifyLog, type IdentifyInputs } from './logs/identify-log.ts'
import { logWindow, type WindowInputs } from './logs/log-window.ts'
import { readLog, type ReadLogInputs, type ReadLogResult } from './logs/read-log.ts'
import { layOut, sweepPoints, type SweepLayout, type SweepPlan, type SweepPoint } from './analyses/tolerance-points.ts'

/** A piece of work short enough to be interrupted between: what crosses to a worker thread. It keeps nothing from one to the next. */
export type Task =
  | { kind: 'nominal'; inputs: NominalInputs }
  | { kind: 'curves'; inputs: CurvesInputs }
  | { kind: 'lay out'; plan: Pick<SweepPlan, 'model' | 'bounds'> }
  | { kind: 'points'; plan: SweepPlan; from: number; count: number }
  | { kind: 'step'; model: JointModel; step: StepInputs; slowest: number | null }
  | { kind: 'rows'; inputs: MapInputs; from: number; count: number }
  | { kind: 'stretches'; inputs: StretchInputs }
  | { kind: 'retune'; inputs: RetuneInputs }
  | { kind: 'read log'; inputs: ReadLogInputs }
  | { kind: 'draw log'; inputs: WindowInputs }
  | { kind: 'compare log'; inputs: CompareInputs }
  | { kind: 'identify'; inputs: IdentifyInputs }

/** Tasks long enough to tell how far they are. */
export const telling: ReadonlySet<Task['kind']> = new Set(['retune', 'read log'])

interface TaskResults {
  nominal: NominalResult
  curves: CurvesResult
  'lay out': SweepLayout
  points: SweepPoint[]
  step: StepRun
  rows: MapCells
  stretches: Stretch[]
  retune: RetuneResult
  'read log': ReadLogResult
  'draw log': LogWindow
  'compare log': Compared
  identify: IdentificationReport
}
export type TaskResult<T extends Task> = TaskResults[T['kind']]

/** What a task came to. `refused`: the inputs themselves can't be computed, and never will be; errors lose their class between threads, so they travel as data. */
export type Outcome<R> = { kind: 'result'; result: R } | { kind: 'refused'; code: string; field: string; text: string }

/** Told of units done within a task that is long. */
export type Told = (done: number) => void

const work: { [K in Task['kind']]: (task: Extract<Task, { kind: K }>, told: Told) => TaskResults[K] } = {
  nominal: ({ inputs }) => nominalAnalysis(inputs),
  curves: ({ inputs }) => curvesAnalysis(inputs),
  'lay out': ({ plan }) => layOut(plan.model, plan.bounds),
  points: ({ plan, from, count }) => sweepPoints(plan, from, count),
  step: ({ model, step, slowest }) => runStep(model, step, windowOf(model, slowest)),
  rows: ({ inputs, from, count }) => mapRows(inputs, from, count),
  stretches: ({ inputs }) => unstableStretches(inputs),
  retune: ({ inputs }, told) => retuneAnalysis(inputs, told),
  'read log': ({ inputs }, told) => readLog(inputs, told),
  'draw log': ({ inputs }) => logWindow(inputs),
  'compare log': ({ inputs }) => compareLog(inputs),
  identify: ({ inputs }) => identifyLog(inputs),
}

/** Does a task, wherever it is called. */
export function perform<T extends Task>(task: T, told: Told = () => {}): Outcome<TaskResult<T>> {
  try {
    return { kind: 'result', result: (work[task.kind] as (task: Task, told: Told) => TaskResult<T>)(task, told) }
  } catch (error) {
    if (!(error instanceof NumericError)) throw error
    return { kind: 'refused', code: error.code, field: error.details.field ?? '', text: error.message }
  }
}
