import { liftPlant } from './lifted-plant.ts'
import { currentSource, OuterSource } from './margin-sources.ts'
import { marginsOf, UNSTABLE_MARGINS, type LoopMargins } from './margins.ts'
import type { ControlMode, JointModel } from './model.ts'
import { closuresOf } from './monodromy.ts'
import { outerSteps } from './outer-steps.ts'
import { OuterTransfer } from './outer-transfer.ts'
import { sampleJoint } from './sampled-joint.ts'
import { stabilityOf, type Verdict } from './stability.ts'
import { resonances } from './resonances.ts'
import { verdictOfSampled, type StabilityVerdict } from './verdict.ts'

export interface LoopPoint extends LoopMargins {
  readonly verdict: Verdict
}

/** One point of a tolerance box or a map. */
export interface PointResult extends StabilityVerdict {
  readonly loops: Readonly<Partial<Record<ControlMode, LoopPoint>>>
}

/** Verdict of a point and, where asked, each loop's gain, phase and delay margins. */
export function evaluatePoint(model: JointModel, withMargins: boolean): PointResult {
  const joint = sampleJoint(model)
  const whole = verdictOfSampled(joint)
  if (!withMargins) return { ...whole, loops: {} }
  const loops: Partial<Record<ControlMode, LoopPoint>> = {}
  const steps = joint.closes === 'current' ? null : outerSteps(joint)
  const plant = steps ? liftPlant(steps) : null
  const transfer = plant ? new OuterTransfer(joint, plant) : null
  for (const closure of closuresOf(joint.closes)) {
    const stability = stabilityOf(joint, steps, closure)
    if (stability.verdict !== 'stable') {
      loops[closure] = { ...UNSTABLE_MARGINS, verdict: stability.verdict }
      continue
    }
    const marks = resonances(stability)
    if (closure === 'current') loops.current = { ...marginsOf(currentSource(joint, undefined, marks), 'gain-and-phase'), verdict: 'stable' }
    else if (plant && transfer) loops[closure] = { ...marginsOf(new OuterSource(joint, plant, closure, marks, transfer), 'gain-and-phase'), verdict: 'stable' }
  }
  return { ...whole, loops }
}
