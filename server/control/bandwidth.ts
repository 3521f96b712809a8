import type { CurrentTransfer } from './current-transfer.ts'
import { currentMonodromy, OuterCarrier, outerLayout, outerMonodromy } from './monodromy.ts'
import { traceLoci, type LocusSource } from './loci.ts'
import { imOf, reOf, type LocusNode } from './locus-node.ts'
import { NEGLIGIBLE } from './locus-straightness.ts'
import { complexMatrix, solveComplex } from './complex-matrix.ts'
import type { LongResponse } from './long-source.ts'
import type { OuterSteps } from './outer-steps.ts'
import type { OuterTransfer } from './outer-transfer.ts'
import type { SampledJoint } from './sampled-joint.ts'

/** The trade's −3 dB. */
export const BANDWIDTH_LEVEL = 10 ** (-3 / 20)

export type Bandwidth =
  | { readonly kind: 'unstable' }
  /** |T| does not fall to the level below half the loop's rate, or lies under it from zero frequency on. */
  | { readonly kind: 'none' }
  | { readonly kind: 'bandwidth'; readonly hz: number }

export interface Bandwidths {
  /** T at zero frequency, real. */
  readonly dcGain: number
  /** Against T at zero frequency. */
  readonly relative: Bandwidth
  /** Against 1. */
  readonly absolute: Bandwidth
}

interface Fundamental {
  L_re: number
  L_im: number
  T_re: number
  T_im: number
}

/** T of a stable loop at θ radians per own tick. */
export type MeasuredOverReference = (theta: number, out: Fundamental) => void

export const currentResponse = (transfer: CurrentTransfer): MeasuredOverReference => (theta, out) => {
  transfer.at(theta)
  transfer.fundamental(out)
}

export const outerResponse = (transfer: OuterTransfer, closure: 'velocity' | 'position'): MeasuredOverReference => (theta, out) => {
  transfer.at(theta)
  transfer.fundamental(closure, out)
}

export const longResponse = (response: LongResponse): MeasuredOverReference => (theta, out) => response.at(theta, out)

/**
 * First frequencies at which |T| falls to −3 dB of its value at zero frequency, and of 1.
 *
 * @param T          of a loop that is stable as it stands
 * @param landmarks  radians per own tick where something narrow may sit
 * @param period     of the loop's own tick, s
 * @accuracy         1e-9 relative (bandwidth.test.ts)
 * @source           control-model.md §4
 */
export function bandwidthsOf(T: MeasuredOverReference, dcGain: number, landmarks: readonly number[], period: number): Bandwidths {
  const out: Fundamental = { L_re: 0, L_im: 0, T_re: 0, T_im: 0 }
  const magnitude = (theta: number): number => {
    T(theta, out)
    return Math.hypot(out.T_re, out.T_im)
  }
  const source: LocusSource = {
    q: 1,
    landmarks,
    evaluate(psi, re, im) {
      T(psi, out)
      re[0] = out.T_re
      im[0] = out.T_im
    },
    // T keeps its value at zero frequency below the loop's slowest pole; two half decades of that are enough.
    isLow: (above, below) => [above, below].every((node) => Math.hypot(reOf(node, 0) - dcGain, imOf(node, 0)) < 0.02 * Math.abs(dcGain)),
  }
  const relativeLevel = BANDWIDTH_LEVEL * Math.abs(dcGain)
  const reaches = Math.abs(dcGain) > BANDWIDTH_LEVEL
  let relative: Bandwidth = { kind: 'none' }
  let absolute: Bandwidth = { kind: 'none' }
  const enough = (left: LocusNode, right: LocusNode): boolean => {
    const a = Math.hypot(reOf(left, 0), imOf(left, 0))
    const b = Math.hypot(reOf(right, 0), imOf(right, 0))
    const fall = (level: number): Bandwidth => ({ kind: 'bandwidth', hz: fallBetween(magnitude, left.psi, right.psi, level) / (2 * Math.PI * period) })
    if (relative.kind === 'none' && a > relativeLevel && b <= relativeLevel) relative = fall(relativeLevel)
    if (reaches && absolute.kind === 'none' && a > BANDWIDTH_LEVEL && b <= BANDWIDTH_LEVEL) absolute = fall(BANDWIDTH_LEVEL)
    return relative.kind !== 'none' && (absolute.kind !== 'none' || !reaches)
  }
  traceLoci(source, { floor: NEGLIGIBLE, enough })
  return { dcGain, relative, absolute }
}

/** Illinois' variant of regula falsi in ln |T|, halved now and then so that it is bounded. */
function fallBetween(magnitude: (theta: number) => number, low: number, high: number, level: number): number {
  let a = low
  let b = high
  let fa = Math.log(magnitude(a) / level)
  let fb = Math.log(magnitude(b) / level)
  let side = 0
  for (let step = 0; step < 60 && b - a > 1e-13 * b && fb < 0; step++) {
    let m = step % 8 === 7 ? 0.5 * (a + b) : (a * fb - b * fa) / (fb - fa)
    if (!(m > a && m < b)) m = 0.5 * (a + b)
    const f = Math.log(magnitude(m) / level)
    if (Math.abs(f) < 1e-13) return m
    if (f > 0) {
      a = m
      fa = f
      if (side === 1) fb /= 2
      side = 1
    } else {
      b = m
      fb = f
      if (side === -1) fa /= 2
      side = -1
    }
  }
  return b
}

/**
 * T at zero frequency: the broken signal answers a constant added to it with 1 − T.
 *
 * Solved from the closed loop at eigenvalue 1, so that no integrator's pole stands in the way.
 */
export function dcGainOf(joint: SampledJoint, steps: OuterSteps | null, closure: 'current' | 'velocity' | 'position'): number {
  if (closure === 'current' || !steps) return currentDcGain(joint)
  const layout = outerLayout(joint, steps, closure)
  const { n } = layout
  const { Phi } = outerMonodromy(joint, steps, closure)
  const pushed = new OuterCarrier(joint, steps, closure, 1)
  pushed.injected[0] = 1
  pushed.run({ re: 1, im: 0 })
  const b = new Float64Array(n)
  pushed.read(layout, (row, values) => {
    b[row] = values[0]
  })
  const s = steadyState(Phi, b, n)
  const carrier = new OuterCarrier(joint, steps, closure, 1)
  carrier.setColumn(layout, s, 0)
  carrier.injected[0] = 1
  let sum = 0
  carrier.observe = (_k, broken) => {
    sum += broken[0]
  }
  carrier.run({ re: 1, im: 0 })
  return 1 - sum / steps.q
}

function currentDcGain(joint: SampledJoint): number {
  const { Phi, n } = currentMonodromy(joint)
  const { nx, Bd, gamma, model } = joint
  const { D, K_pc, K_ic } = model.firmware
  // A constant added to the request u enters the delay line, or the plant at once where there is none.
  const b = new Float64Array(n)
  const u = nx + (K_ic !== 0 ? 1 : 0)
  if (D > 0) b[u] = 1
  else for (let i = 0; i < nx; i++) b[i] = gamma * Bd[i]
  const s = steadyState(Phi, b, n)
  const K = K_pc + K_ic * joint.timing.T_c
  return 1 - (1 - K * s[0] + (K_ic !== 0 ? s[nx] : 0))
}

/** (I − Φ)⁻¹·b. */
function steadyState(Phi: Float64Array, b: Float64Array, n: number): Float64Array {
  const M = complexMatrix(n)
  for (let k = 0; k < n * n; k++) M.re[k] = -Phi[k]
  for (let i = 0; i < n; i++) M.re[i * n + i] += 1
  const x = complexMatrix(n, 1)
  x.re.set(b)
  solveComplex(M, x, 1, { re: 0, im: 0 })
  return x.re
}
