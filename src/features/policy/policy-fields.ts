import { proposerRoles, type PolicyContent } from '../../../shared/contract/policy.ts'

/** One limit of a policy as the pages show it. The pointer leads into the content. */
export interface PolicyField {
  pointer: string
  name: string
  /** which of the limits of one figure: "advise", "worst case" */
  stage: string
  unit: string
  /** a choice of words instead of a number */
  choices?: readonly string[]
}

const field = (pointer: string, name: string, stage: string, unit: string): PolicyField => ({ pointer, name, stage, unit })
const proposer = (step: string): PolicyField => ({ pointer: `/mayPropose/${step}`, name: step === 'patch' ? 'a patch is submitted' : `a ${step} version is submitted`, stage: 'by a', unit: '', choices: proposerRoles })

/** Every limit once, those of one figure together. */
export const policyFields: readonly PolicyField[] = [
  field('/peerReviews', 'peer reviews before a release', 'at least', ''),
  proposer('patch'),
  proposer('minor'),
  proposer('major'),
  field('/concession/longestDays', 'time that a concession holds', 'at most', 'days'),
  field('/concession/mostBoards', 'boards of a concession', 'at most', 'boards'),
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

export type Limit = number | string

/** What stands at a field of a policy; undefined in one from before there was such a rule. */
export function limitAt(content: PolicyContent, pointer: string): Limit | undefined {
  let here: unknown = content
  for (const part of pointer.slice(1).split('/')) here = (here as Record<string, unknown> | undefined)?.[part]
  return here as Limit | undefined
}

/** The policy that typed limits make: a field each, by its pointer. */
export function contentOf(numbers: Readonly<Record<string, Limit>>): PolicyContent {
  const content: Record<string, unknown> = {}
  for (const { pointer } of policyFields) {
    const [first, second] = pointer.slice(1).split('/')
    if (second === undefined) content[first] = numbers[pointer]
    else content[first] = { ...(content[first] as object | undefined), [second]: numbers[pointer] }
  }
  return content as PolicyContent
}
