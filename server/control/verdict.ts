import type { JointModel } from './model.ts'
import { outerSteps } from './outer-steps.ts'
import { sampleJoint, type SampledJoint } from './sampled-joint.ts'
import { stabilityOf, verdictOf, type Verdict } from './stability.ts'

/** The answer that a tolerance vertex or a map's cell needs. */
export interface StabilityVerdict {
  /** Over the hyperperiod, in current mode too. */
  readonly rho: number
  readonly verdict: Verdict
  readonly epsilon: number
}

/**
 * Whether the joint is stable, and by how much: ρ alone, as fast as can be done soundly.
 *
 * @throws NumericError from validation, refused rates, no-convergence
 * @source control-model.md §3
 */
export function verdict(model: JointModel): StabilityVerdict {
  return verdictOfSampled(sampleJoint(model))
}

/** As verdict, for a joint already sampled. */
export function verdictOfSampled(joint: SampledJoint): StabilityVerdict {
  const { closes, timing } = joint
  const stability = stabilityOf(joint, closes === 'current' ? null : outerSteps(joint), closes)
  if (closes !== 'current') return { rho: stability.rho, verdict: stability.verdict, epsilon: stability.epsilon }
  const rho = stability.rho ** timing.p
  return { rho, verdict: verdictOf(rho, stability.epsilon), epsilon: stability.epsilon }
}
