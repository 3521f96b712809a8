import { eigenvalueError } from './eigenvalue-error.ts'
import { eigenvalues, spectralRadius } from './eigenvalues.ts'
import { NumericError } from './errors.ts'
import type { ControlMode } from './model.ts'
import { currentMonodromy, outerMonodromy, type Monodromy } from './monodromy.ts'
import type { OuterSteps } from './outer-steps.ts'
import type { SampledJoint } from './sampled-joint.ts'

export type Verdict = 'stable' | 'unstable' | 'boundary'

/** Least distance of ρ from 1 that counts as one side or the other. */
export const EPSILON = 1e-9

export interface Stability {
  /** Over `period`. */
  readonly rho: number
  readonly verdict: Verdict
  /** max(1e-9, estimated error of the dominant eigenvalue). */
  readonly epsilon: number
  readonly period: number
  readonly re: Float64Array
  readonly im: Float64Array
}

export function verdictOf(rho: number, epsilon: number): Verdict {
  if (rho < 1 - epsilon) return 'stable'
  return rho > 1 + epsilon ? 'unstable' : 'boundary'
}

/** Monodromy of a closure: the current loop over one current tick, the others over the hyperperiod. */
export function monodromyOf(joint: SampledJoint, steps: OuterSteps | null, closure: ControlMode): Monodromy {
  return closure === 'current' || !steps ? currentMonodromy(joint) : outerMonodromy(joint, steps, closure)
}

/** @throws NumericError not-finite where the values together are beyond what can be computed */
export function guardRadius(rho: number): void {
  if (Number.isFinite(rho)) return
  throw new NumericError('not-finite', { field: 'rho', value: rho, text: 'The loop grows beyond every number within one hyperperiod; no verdict was given. Check the gains and the units of the drive train.' })
}

/**
 * Stability of one closure from all eigenvalues of its monodromy matrix.
 *
 * The eigenvalue's own error is estimated where it could decide: within 1e-3 of the boundary.
 *
 * @source control-model.md §3
 */
export function stabilityOf(joint: SampledJoint, steps: OuterSteps | null, closure: ControlMode): Stability {
  const { n, Phi } = monodromyOf(joint, steps, closure)
  const { re, im } = eigenvalues(Phi, n)
  const rho = spectralRadius(re, im, n)
  guardRadius(rho)
  let epsilon = EPSILON
  if (Math.abs(rho - 1) < 1e-3) {
    for (let k = 0; k < n; k++) {
      if (Math.hypot(re[k], im[k]) >= rho * (1 - 1e-12)) {
        // A defective eigenvalue has no finite estimate; then nothing within 1e-6 of the boundary is decided.
        epsilon = Math.max(epsilon, Math.min(1e-6, eigenvalueError(Phi, n, re[k], im[k])))
        break
      }
    }
  }
  const period = closure === 'current' ? joint.timing.T_c : joint.timing.T_h
  return { rho, verdict: verdictOf(rho, epsilon), epsilon, period, re, im }
}
