import { bandwidthsOf, currentResponse, dcGainOf, longResponse, outerResponse, type Bandwidths } from './bandwidth.ts'
import { CurrentTransfer } from './current-transfer.ts'
import { NumericError } from './errors.ts'
import { liftPlant } from './lifted-plant.ts'
import { windowDelay } from './closed-forms.ts'
import { currentSource } from './margin-sources.ts'
import { marginsOf, UNSTABLE_MARGINS, type LoopMargins } from './margins.ts'
import type { ControlMode, JointModel } from './model.ts'
import { closuresOf } from './monodromy.ts'
import { outerSteps } from './outer-steps.ts'
import { LongResponse } from './long-source.ts'
import { outerSource, SHORT_Q } from './outer-source.ts'
import { OuterTransfer } from './outer-transfer.ts'
import { velocityQuantum } from './plant.ts'
import { resonances, unfold } from './resonances.ts'
import { sampleJoint, type SampledJoint } from './sampled-joint.ts'
import { guardRadius, stabilityOf, verdictOf, type Stability, type Verdict } from './stability.ts'

/** Eigenvalues below this modulus have died out after one hyperperiod and are not reported. */
const SIGNIFICANT = 1e-3

export interface SignificantEigenvalue {
  readonly re: number
  readonly im: number
  readonly modulus: number
  /** 1/s; negative where it grows. */
  readonly decayRate: number
  /** Known only modulo 1/T_h, hence no damping ratio. */
  readonly foldedHz: number
}

export interface LoopReport extends LoopMargins {
  readonly rho: number
  /** s over which `rho` is taken: one current tick for the current loop, T_h for the others. */
  readonly period: number
  readonly verdict: Verdict
  readonly epsilon: number
  /** Null for a loop that is not stable as it stands. */
  readonly bandwidths: Bandwidths | null
}

export interface LinearReport {
  readonly p: number
  readonly q: number
  readonly T_c: number
  readonly T_o: number
  readonly T_h: number
  /** The mode that the gains really close. */
  readonly closes: ControlMode
  /** States of the monodromy matrix as control-model.md §3 counts them. */
  readonly n_states: number
  readonly rho: number
  /** In current mode: over one current tick. */
  readonly rhoPerCurrentTick: number | null
  readonly verdict: Verdict
  readonly epsilon: number
  readonly decayRate: number
  /** s; null where nothing decays. */
  readonly slowestTimeConstant: number | null
  readonly eigenvalues: readonly SignificantEigenvalue[]
  /** All eigenvalues over T_h, those that die out at once included. */
  readonly spectrum: { readonly re: Float64Array; readonly im: Float64Array }
  /** Frequencies of eigenvalues are known modulo this, Hz. */
  readonly foldHz: number
  readonly loops: Readonly<Partial<Record<ControlMode, LoopReport>>>
  /** Delay of the velocity estimate, s. */
  readonly windowDelay: number
  readonly velocityQuantum: { readonly omega: number; readonly i: number }
}

/**
 * Everything linear about one joint: verdict, eigenvalues, and each closed loop's margins and bandwidths.
 *
 * @throws NumericError from validation, refused rates, or an iteration that met its bound
 * @accuracy ρ 1e-12, margins 1e-6 of their unit, against control-cases.json and perturbation (tests/control)
 * @source control-model.md §1–§4, §7
 */
export function analyse(model: JointModel): LinearReport {
  const joint = sampleJoint(model)
  const { timing, closes } = joint
  const steps = closes === 'current' ? null : outerSteps(joint)
  const plant = steps ? liftPlant(steps) : null
  const transfer = plant ? new OuterTransfer(joint, plant) : null
  const loops: Partial<Record<ControlMode, LoopReport>> = {}
  let last: Stability | null = null
  for (const closure of closuresOf(closes)) {
    const stability = stabilityOf(joint, steps, closure)
    last = stability
    const base = { rho: stability.rho, period: stability.period, verdict: stability.verdict, epsilon: stability.epsilon }
    if (stability.verdict !== 'stable') {
      loops[closure] = { ...base, ...UNSTABLE_MARGINS, bandwidths: null }
      continue
    }
    const marks = resonances(stability)
    if (closure === 'current') {
      const current = new CurrentTransfer(joint)
      const margins = marginsOf(currentSource(joint, current, marks))
      loops.current = { ...base, ...margins, bandwidths: bandwidthsOf(currentResponse(current), dcGainOf(joint, null, 'current'), marks, timing.T_c) }
    } else if (steps && plant && transfer) {
      const long = timing.q > SHORT_Q
      const margins = marginsOf(outerSource(joint, steps, plant, closure, marks, transfer))
      const bandwidths = bandwidthsOf(long ? longResponse(new LongResponse(joint, steps, closure)) : outerResponse(transfer, closure), dcGainOf(joint, steps, closure), unfold(marks, timing.q), timing.T_o)
      loops[closure] = { ...base, ...margins, bandwidths }
    }
  }
  if (!last) throw new NumericError('bad-input', { text: 'The joint closes no loop; nothing was computed.' })
  return { ...overall(joint, last), loops }
}

function overall(joint: SampledJoint, last: Stability): Omit<LinearReport, 'loops'> {
  const { timing, closes, model } = joint
  const { p, q, T_c, T_o, T_h } = timing
  const perTick = closes === 'current'
  const rho = perTick ? last.rho ** p : last.rho
  guardRadius(rho)
  const epsilon = perTick ? Math.max(last.epsilon, p * (last.epsilon - 1e-9)) : last.epsilon
  const list: SignificantEigenvalue[] = []
  const spectrum = { re: last.re.slice(), im: last.im.slice() }
  for (let k = 0; k < last.re.length; k++) {
    let modulus = Math.hypot(last.re[k], last.im[k])
    let angle = Math.atan2(last.im[k], last.re[k])
    if (perTick) {
      modulus **= p
      angle *= p
      spectrum.re[k] = modulus * Math.cos(angle)
      spectrum.im[k] = modulus * Math.sin(angle)
    }
    if (modulus < SIGNIFICANT) continue
    const folded = Math.abs(Math.atan2(Math.sin(angle), Math.cos(angle)))
    list.push({
      re: spectrum.re[k],
      im: spectrum.im[k],
      modulus,
      decayRate: -Math.log(modulus) / T_h,
      foldedHz: folded / (2 * Math.PI * T_h),
    })
  }
  list.sort((a, b) => b.modulus - a.modulus || b.im - a.im)
  const decayRate = -Math.log(rho) / T_h
  return {
    p,
    q,
    T_c,
    T_o,
    T_h,
    closes,
    n_states: stateCount(joint),
    rho,
    rhoPerCurrentTick: perTick ? last.rho : null,
    // One tick decides as well as p of them, and nearer to the boundary.
    verdict: perTick ? verdictOf(rho, epsilon) : last.verdict,
    epsilon,
    decayRate,
    slowestTimeConstant: decayRate > 0 ? 1 / decayRate : null,
    eigenvalues: list,
    spectrum,
    foldHz: 1 / T_h,
    windowDelay: windowDelay(model.firmware.W, T_o),
    velocityQuantum: velocityQuantum(model.plant, model.firmware),
  }
}

/** States as §3 lists them: plant, window, integrators with gain, delay lines, held references. */
export function stateCount(joint: SampledJoint): number {
  const { plant, firmware } = joint.model
  const { W, D, K_ip, K_iv, K_ic } = firmware
  const integrator = (gain: number): number => (gain === 0 ? 0 : 1)
  const inner = integrator(K_ic) + D + 1
  if (joint.closes === 'current') return joint.nx + inner
  const mechanics = plant.k_s === null ? 1 : 3
  const outer = 1 + mechanics + W + integrator(K_iv) + 1 + (firmware.sensor_delay ?? 0) + (firmware.outer_delay ?? 0)
  return inner + outer + (joint.closes === 'position' ? 1 + integrator(K_ip) : 0)
}
