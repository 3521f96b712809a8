import { liftPlant } from './lifted-plant.ts'
import { currentSource } from './margin-sources.ts'
import { marginsOf, UNSTABLE_MARGINS, type LoopMargins } from './margins.ts'
import type { ControlMode, JointModel } from './model.ts'
import { validateJointModel } from './model.ts'
import { closuresOf } from './monodromy.ts'
import { outerSteps } from './outer-steps.ts'
import { outerSource } from './outer-source.ts'
import { OuterTransfer } from './outer-transfer.ts'
import { withValues, type ParameterName } from './parameters.ts'
import { closedMode, sampleJoint, samplePassingJoint, type SampledJoint } from './sampled-joint.ts'
import { stabilityOf, type Verdict } from './stability.ts'
import { resonances } from './resonances.ts'
import { verdictOfSampled, type PreparedOuter, type RootGuess, type StabilityVerdict } from './verdict.ts'

export interface LoopPoint extends LoopMargins {
  readonly verdict: Verdict
}

/** One point of a tolerance box or a map. */
export interface PointResult extends StabilityVerdict {
  /** Empty where margins were not asked for. */
  readonly loops: Readonly<Partial<Record<ControlMode, LoopPoint>>>
}

/** Verdict of a joint and, where asked, each loop's gain, phase and delay margins. */
export function evaluatePoint(model: JointModel, withMargins: boolean): PointResult {
  const joint = sampleJoint(model)
  return evaluateSampled(joint, withMargins && joint.closes !== 'current' ? prepare(joint) : null, withMargins, null)
}

const NO_LOOPS: PointResult['loops'] = {}

/** Laws of the outer task: what the sampled joint and its lift do not depend on. */
const OUTER_LAWS: readonly ParameterName[] = ['K_pp', 'K_ip', 'K_pv', 'K_iv']

/** Evaluates points of one sweep. */
export type PointEvaluator = (values: ArrayLike<number>, guess: RootGuess) => PointResult

/**
 * Evaluates many points that differ in the named values alone.
 *
 * Where only laws of the outer task vary, the joint is sampled and lifted once for all points.
 */
export function pointEvaluator(model: JointModel, names: readonly ParameterName[], withMargins: boolean): PointEvaluator {
  if (!names.every((name) => OUTER_LAWS.includes(name))) {
    return (values, guess) => {
      const changed = withValues(model, names, values)
      const joint = withMargins ? sampleJoint(changed) : samplePassingJoint(changed)
      return evaluateSampled(joint, withMargins && joint.closes !== 'current' ? prepare(joint) : null, withMargins, guess)
    }
  }
  const base = sampleJoint(model)
  const prepared = prepare(base)
  return (values, guess) => {
    const changed = withValues(model, names, values)
    validateJointModel(changed)
    const closes = closedMode(changed)
    return evaluateSampled({ ...base, model: changed, closes }, closes === 'current' ? null : prepared, withMargins, guess)
  }
}

function prepare(joint: SampledJoint): PreparedOuter {
  const steps = outerSteps(joint)
  return { steps, lifted: liftPlant(steps) }
}

function evaluateSampled(joint: SampledJoint, prepared: PreparedOuter | null, withMargins: boolean, guess: RootGuess | null): PointResult {
  const whole = verdictOfSampled(joint, prepared, guess)
  if (!withMargins) return { rho: whole.rho, verdict: whole.verdict, epsilon: whole.epsilon, route: whole.route, loops: NO_LOOPS }
  const loops: Partial<Record<ControlMode, LoopPoint>> = {}
  const transfer = prepared ? new OuterTransfer(joint, prepared.lifted) : null
  for (const closure of closuresOf(joint.closes)) {
    const stability = stabilityOf(joint, prepared?.steps ?? null, closure)
    if (stability.verdict !== 'stable') {
      loops[closure] = { ...UNSTABLE_MARGINS, verdict: stability.verdict }
      continue
    }
    const marks = resonances(stability)
    if (closure === 'current') loops.current = { ...marginsOf(currentSource(joint, undefined, marks), 'gain-and-phase'), verdict: 'stable' }
    else if (prepared && transfer) loops[closure] = { ...marginsOf(outerSource(joint, prepared.steps, prepared.lifted, closure, marks, transfer), 'gain-and-phase'), verdict: 'stable' }
  }
  return { ...whole, loops }
}
