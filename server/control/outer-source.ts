import { LongSource } from './long-source.ts'
import type { LiftedPlant } from './lifted-plant.ts'
import { OuterSource } from './margin-sources.ts'
import type { MarginSource } from './loci.ts'
import type { OuterSteps } from './outer-steps.ts'
import type { OuterTransfer } from './outer-transfer.ts'
import type { SampledJoint } from './sampled-joint.ts'

/** Up to this many outer ticks in the hyperperiod the loop is a product of laws and plant; beyond, it is lifted whole. */
export const SHORT_Q = 16

/** The source of margins of an outer loop, whichever way suits the length of its hyperperiod. */
export function outerSource(
  joint: SampledJoint,
  steps: OuterSteps,
  plant: LiftedPlant,
  closure: 'velocity' | 'position',
  landmarks: readonly number[],
  transfer: OuterTransfer,
): MarginSource {
  return steps.q <= SHORT_Q ? new OuterSource(joint, plant, closure, landmarks, transfer) : new LongSource(joint, steps, closure, landmarks)
}
