import type { JointFigures, StepTraces } from '../../../shared/contract/checks.ts'
import { analyse } from '../../control/analyse.ts'
import { linearFigures } from './linear-figures.ts'
import type { NominalInputs } from './requests.ts'
import { runStep, windowOf } from './step-response.ts'
import { windingFigures } from './winding-figures.ts'

export interface NominalResult {
  figures: Omit<JointFigures, 'tolerance'>
  /** null when the loop is not stable */
  traces: StepTraces | null
}

/** One joint at its nominal values: everything linear, the step, the winding. @throws NumericError */
export function nominalAnalysis({ model, step, heat }: NominalInputs): NominalResult {
  const linear = linearFigures(analyse(model))
  const run = linear.verdict === 'stable' ? runStep(model, step, windowOf(model, linear.slowestTimeConstantS)) : null
  return { figures: { ...linear, step: run?.figures ?? null, heat: heat ? windingFigures(heat) : null }, traces: run?.traces ?? null }
}
