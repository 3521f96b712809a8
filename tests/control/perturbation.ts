import { complexEigenvalues } from '../../server/control/complex-matrix.ts'
import { eigenvalues, spectralRadius } from '../../server/control/eigenvalues.ts'
import type { ControlMode, JointModel } from '../../server/control/model.ts'
import { currentMonodromy, outerMonodromy } from '../../server/control/monodromy.ts'
import { outerSteps } from '../../server/control/outer-steps.ts'
import { sampleJoint } from '../../server/control/sampled-joint.ts'

/**
 * ρ(Φ) of one closure with a factor g·e^{−jφ} in its broken signal: the definition of every margin, with no frequency response in it.
 */
export function perturbedRadius(model: JointModel, closure: ControlMode): (g: number, phi: number) => number {
  const joint = sampleJoint(model)
  const steps = joint.closes === 'current' ? null : outerSteps(joint)
  return (g, phi) => {
    const factor = phi === 0 ? { re: g, im: 0 } : { re: g * Math.cos(phi), im: -g * Math.sin(phi) }
    const { n, Phi, PhiIm } = closure === 'current' || !steps ? currentMonodromy(joint, factor) : outerMonodromy(joint, steps, closure, factor)
    if (!PhiIm) {
      const { re, im } = eigenvalues(Phi, n)
      return spectralRadius(re, im, n)
    }
    const re = new Float64Array(n)
    const im = new Float64Array(n)
    complexEigenvalues({ n, re: Phi.slice(), im: PhiIm.slice() }, re, im)
    return spectralRadius(re, im, n)
  }
}

/** Smallest x in (from, to] of `count` equal (or equal-ratio) steps at which f reaches 1, by bisection; null when it never does. */
export function firstReaching(f: (x: number) => number, from: number, to: number, count: number, ratio: boolean): number | null {
  const at = (k: number): number => (ratio ? from * (to / from) ** (k / count) : from + ((to - from) * k) / count)
  let before = from
  for (let k = 1; k <= count; k++) {
    const x = at(k)
    if (f(x) >= 1) {
      let a = before
      let b = x
      for (let step = 0; step < 50; step++) {
        const m = 0.5 * (a + b)
        if (f(m) >= 1) b = m
        else a = m
      }
      return 0.5 * (a + b)
    }
    before = x
  }
  return null
}
