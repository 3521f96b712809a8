import { Type, type Static } from '@sinclair/typebox'

const strict = { additionalProperties: false }
const pair = () => Type.Object({ advise: Type.Number(), concession: Type.Number() }, strict)

/** Limits of the findings and the count of peer reviews; one version of a machine's policy. Units in the names. */
export const PolicyContent = Type.Object(
  {
    peerReviews: Type.Integer({ minimum: 1, maximum: 5 }),
    phaseMarginDeg: Type.Object({ nominal: Type.Number(), worst: Type.Number(), block: Type.Number() }, strict),
    gainMarginDb: Type.Object({ nominal: Type.Number(), worst: Type.Number() }, strict),
    sensitivityPeak: pair(),
    separation: pair(),
    outerRateOverBandwidth: Type.Number(),
    deadTimePhaseDeg: Type.Number(),
    quantumRipplePercent: Type.Number(),
    windingReserveK: Type.Number(),
    overshootPercent: Type.Number(),
    finalErrorCounts: Type.Number(),
    limitCycleCounts: Type.Number(),
    roundingPercent: pair(),
    busLoadPercent: Type.Object({ advise: Type.Number(), block: Type.Number() }, strict),
  },
  strict,
)
export type PolicyContent = Static<typeof PolicyContent>

/** What a machine begins with; sources stand beside each finding (server/modules/checks/findings). */
export const defaultPolicy: PolicyContent = {
  peerReviews: 1,
  phaseMarginDeg: { nominal: 45, worst: 35, block: 30 },
  gainMarginDb: { nominal: 8, worst: 6 },
  sensitivityPeak: { advise: 1.7, concession: 2.0 },
  separation: { advise: 4, concession: 2.5 },
  outerRateOverBandwidth: 20,
  deadTimePhaseDeg: 36,
  quantumRipplePercent: 5,
  windingReserveK: 10,
  overshootPercent: 15,
  finalErrorCounts: 2,
  limitCycleCounts: 2,
  roundingPercent: { advise: 1, concession: 5 },
  busLoadPercent: { advise: 70, block: 100 },
}

export interface PolicyView {
  machine: string
  number: number
  state: 'proposed' | 'in force' | 'superseded' | 'declined'
  content: PolicyContent
  reason: string
  author: string | null
  proposedAt: string
  signedBy: string | null
  signedAt: string | null
}
