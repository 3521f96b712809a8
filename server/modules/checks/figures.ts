import type { JointFigures } from '../../../shared/contract/checks.ts'
import { eigenvalues, spectralRadius } from '../../control/eigenvalues.ts'
import type { JointModel } from '../../control/model.ts'
import { currentMonodromy, outerMonodromy } from '../../control/monodromy.ts'
import { outerSteps } from '../../control/outer-steps.ts'
import { sampleJoint } from '../../control/sampled-joint.ts'

/** The figures of one joint's closed cascade, as the check carries them. */
export function figuresOf(model: JointModel): JointFigures {
  const joint = sampleJoint(model)
  const m = joint.closes === 'current' ? currentMonodromy(joint) : outerMonodromy(joint, outerSteps(joint), joint.closes)
  const ev = eigenvalues(m.Phi, m.n)
  const rho = spectralRadius(ev.re, ev.im, m.n)
  const T = joint.closes === 'current' ? joint.timing.T_c : joint.timing.T_h
  return { verdict: rho < 1 - 1e-9 ? 'stable' : rho > 1 + 1e-9 ? 'unstable' : 'on the boundary', rho, hyperperiodS: T, decayRate: -Math.log(rho) / T, slowestTimeConstantS: rho < 1 ? -T / Math.log(rho) : null, eigenvalues: [], loops: {} }
}
