import type { PolicyContent } from '../../../shared/contract/policy.ts'

/** One limit of a policy as the pages show it. The pointer leads into the content. */
export interface PolicyField {
  pointer: string
  name: string
  /** which of the limits of one figure: "advise", "worst case" */
  stage: string
  unit: string
}

const field = (pointer: string, name: string, stage: string, unit: string): PolicyField => ({ pointer, name, stage, unit })

/** Every limit once, those of one figure together. */
export const policyFields: readonly PolicyField[] = [
  field('/peerReviews', 'peer reviews before a release', 'at least', ''),
  field('/phaseMarginDeg/nominal', 'phase margin', 'nominal, at least', '°'),
  field('/phaseMarginDeg/worst', 'phase margin', 'worst case, at least', '°'),
  field('/phaseMarginDeg/block', 'phase margin', 'blocks below', '°'),
  field('/gainMarginDb/nominal', 'gain margin', 'nominal, at least', 'dB'),
  field('/gainMarginDb/worst', 'gain margin', 'worst case, at least', 'dB'),
  field('/sensitivityPeak/advise', 'sensitivity peak', 'advises above', ''),
  field('/sensitivityPeak/concession', 'sensitivity peak', 'needs a concession above', ''),
  field('/separation/advise', 'separation of loops', 'advises below', ''),
  field('/separation/concession', 'separation of loops', 'needs a concession below', ''),
  field('/outerRateOverBandwidth', 'outer rate over bandwidth', 'at least', ''),
  field('/deadTimePhaseDeg', 'phase lost to dead time', 'at most', '°'),
  field('/quantumRipplePercent', 'current ripple of the sensor quantum', 'at most', '%'),
  field('/windingReserveK', 'winding temperature reserve', 'at least', 'K'),
  field('/overshootPercent', 'overshoot', 'at most', '%'),
  field('/finalErrorCounts', 'final error', 'at most', 'counts'),
  field('/limitCycleCounts', 'limit cycle', 'at most', 'counts'),
  field('/roundingPercent/advise', 'rounding of a value', 'advises above', '%'),
  field('/roundingPercent/concession', 'rounding of a value', 'needs a concession above', '%'),
  field('/busLoadPercent/advise', 'bus load', 'advises above', '%'),
  field('/busLoadPercent/block', 'bus load', 'blocks above', '%'),
]

/** The number at a field of a policy. */
export function limitAt(content: PolicyContent, pointer: string): number {
  let here: unknown = content
  for (const part of pointer.slice(1).split('/')) here = (here as Record<string, unknown>)[part]
  return here as number
}

/** The policy that typed numbers make: a field each, by its pointer. */
export function contentOf(numbers: Readonly<Record<string, number>>): PolicyContent {
  const content: Record<string, unknown> = {}
  for (const { pointer } of policyFields) {
    const [first, second] = pointer.slice(1).split('/')
    if (second === undefined) content[first] = numbers[pointer]
    else content[first] = { ...(content[first] as object | undefined), [second]: numbers[pointer] }
  }
  return content as PolicyContent
}
