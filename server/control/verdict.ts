import { Characteristic } from './characteristic.ts'
import { evaluatePolynomial, largestRoot, rootWorkspace, type RootWorkspace } from './largest-root.ts'
import { emptyLift, liftPlant, type LiftedPlant } from './lifted-plant.ts'
import type { JointModel } from './model.ts'
import { passingOuterSteps, type OuterSteps } from './outer-steps.ts'
import { samplePassingJoint, type SampledJoint } from './sampled-joint.ts'
import { EPSILON, guardRadius, stabilityOf, verdictOf, type Verdict } from './stability.ts'

/** The answer that a tolerance vertex or a map's cell needs. */
export interface StabilityVerdict {
  /** Over the hyperperiod, in current mode too. */
  readonly rho: number
  readonly verdict: Verdict
  readonly epsilon: number
  /** Which way ρ was found: largest root of the characteristic polynomial, or all eigenvalues of Φ. */
  readonly route: 'polynomial' | 'eigenvalues'
}

/** Where the polynomial route is used: few outer ticks in the hyperperiod, few states beside the window. */
const POLYNOMIAL_Q = 8
const POLYNOMIAL_STATES = 9
/** Nearer to the boundary than this the eigenvalues decide, with their own error estimate. */
const NEAR = 1e-6
/** Larger corrections mean that the polynomial's coefficients do not describe the root. */
const CORRECTION = 1e-7

interface Engine {
  readonly characteristic: Characteristic
  readonly work: RootWorkspace
  readonly lifted: LiftedPlant
}

/** Where a neighbouring joint has its largest root; the caller keeps it, so that results do not depend on what ran before. */
export interface RootGuess {
  re: number
  im: number
}

/** One engine for each shape of joint met lately. */
const engines = new Map<string, Engine>()
const ENGINES_KEPT = 16

/**
 * Whether the joint is stable, and by how much: ρ alone, as fast as can be done soundly.
 *
 * Expands det(λI − Φ) from q × q determinants, finds its largest root, proves by Schur and Cohn's test that no other is
 * larger, and corrects the root by one Newton step on the determinant itself. Where the proof fails, the hyperperiod is long, or ρ is
 * within 1e-6 of 1, all eigenvalues of Φ are computed instead.
 *
 * @throws   NumericError from validation, refused rates, no-convergence
 * @accuracy ρ within 1e-10 of the eigenvalue route over random joints (verdict.test.ts)
 * @source   control-model.md §3
 */
export function verdict(model: JointModel): StabilityVerdict {
  return verdictOfSampled(samplePassingJoint(model))
}

/** Outer steps and their lift, computed once for many laws on one sampled joint. */
export interface PreparedOuter {
  readonly steps: OuterSteps
  readonly lifted: LiftedPlant
}

/**
 * As verdict, for a joint already sampled.
 *
 * @param guess  starts the search for the root, and receives the root found
 */
export function verdictOfSampled(joint: SampledJoint, prepared: PreparedOuter | null = null, guess: RootGuess | null = null): StabilityVerdict {
  const { closes, timing } = joint
  const steps = closes === 'current' ? null : (prepared?.steps ?? passingOuterSteps(joint))
  if (closes !== 'current' && steps) {
    const rho = radiusByPolynomial(joint, steps, closes, prepared?.lifted ?? null, guess)
    if (rho >= 0 && Math.abs(rho - 1) > NEAR) return { rho, verdict: verdictOf(rho, EPSILON), epsilon: EPSILON, route: 'polynomial' }
  }
  const stability = stabilityOf(joint, steps, closes)
  const rho = closes === 'current' ? stability.rho ** timing.p : stability.rho
  guardRadius(rho)
  return { rho, verdict: verdictOf(rho, stability.epsilon), epsilon: stability.epsilon, route: 'eigenvalues' }
}

/** ρ of an outer closure, or −1 where the polynomial route proves nothing or is not worth its cost. */
export function radiusByPolynomial(joint: SampledJoint, steps: OuterSteps, closure: 'velocity' | 'position', lifted: LiftedPlant | null, guess: RootGuess | null): number {
  if (steps.q > POLYNOMIAL_Q || steps.start.length > POLYNOMIAL_STATES) return -1
  const engine = engineFor(joint, steps, closure)
  if (!lifted) engine.characteristic.setPlant(liftPlant(steps, engine.lifted))
  else if (!engine.characteristic.holds(lifted)) engine.characteristic.setPlant(lifted)
  return radiusOf(engine, joint, guess)
}

function radiusOf(engine: Engine, joint: SampledJoint, guess: RootGuess | null): number {
  const { characteristic, work } = engine
  characteristic.setLaws(joint.model.firmware, joint.timing.T_o)
  const noise = characteristic.expand()
  if (!(noise < 1e-9)) return -1
  if (!largestRoot(characteristic.c, characteristic.degree, noise, guess, work)) return -1
  const { root, value } = work
  if (guess) {
    guess.re = root.re
    guess.im = root.im
  }
  evaluatePolynomial(characteristic.c, characteristic.degree, root.re, root.im, value)
  const { slopeRe, slopeIm } = value
  characteristic.valueAt(root.re, root.im, exact)
  const size = slopeRe * slopeRe + slopeIm * slopeIm
  const dr = (exact.re * slopeRe + exact.im * slopeIm) / size
  const di = root.im === 0 ? 0 : (exact.im * slopeRe - exact.re * slopeIm) / size
  if (!(Math.abs(dr) + Math.abs(di) < CORRECTION * Math.max(1, Math.abs(root.re) + root.im))) return -1
  const re = root.re - dr
  const im = root.im - di
  return im === 0 ? Math.abs(re) : Math.sqrt(re * re + im * im)
}

const exact = { re: 0, im: 0 }

function engineFor(joint: SampledJoint, steps: OuterSteps, closure: 'velocity' | 'position'): Engine {
  const { W, K_ip, K_iv } = joint.model.firmware
  const position = closure === 'position'
  const integrators = (position ? 1 : 0) + (position && K_ip !== 0 ? 1 : 0) + (K_iv !== 0 ? 1 : 0)
  const key = `${steps.q} ${steps.start.length} ${W} ${closure} ${integrators}`
  let engine = engines.get(key)
  if (!engine) {
    if (engines.size >= ENGINES_KEPT) engines.delete(engines.keys().next().value as string)
    const characteristic = new Characteristic(steps.q, steps.start.length, W, position, integrators)
    engine = { characteristic, lifted: emptyLift(steps.q, steps.start.length), work: { ...rootWorkspace(characteristic.degree), small: W } }
    engines.set(key, engine)
  }
  return engine
}
