import { Type, type Static } from '@sinclair/typebox'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }
const limit = (unit: string, maximum = 1e6) => Type.Number({ minimum: 0, maximum, description: unit })
const degrees = () => limit('degrees', 180)
const percent = () => limit('percent', 1000)

/** Roles that a policy may ask of whoever submits a change, besides the right to draft it. */
export const proposerRoles = ['controls engineer', 'peer reviewer', 'release manager'] as const
const Proposer = Type.Union(proposerRoles.map((role) => Type.Literal(role)))

/** Limits of the findings, the count of peer reviews, what a concession may ask, who may propose what; one version of a machine's policy. Units in the names. */
export const PolicyContent = Type.Object(
  {
    peerReviews: Type.Integer({ minimum: 1, maximum: 5 }),
    /** longest time and most boards that one concession may be asked for; absent in policies from before these rules: any */
    concession: Type.Optional(Type.Object({ longestDays: Type.Integer({ minimum: 1, maximum: 3650 }), mostBoards: Type.Integer({ minimum: 1, maximum: 1_000_000 }) }, strict)),
    /** role that whoever submits a change must hold, by the step of version that Detent proposes for it; absent: none but the right to draft */
    mayPropose: Type.Optional(Type.Object({ patch: Proposer, minor: Proposer, major: Proposer }, strict)),
    phaseMarginDeg: Type.Object({ nominal: degrees(), worst: degrees(), block: degrees() }, strict),
    gainMarginDb: Type.Object({ nominal: limit('dB'), worst: limit('dB') }, strict),
    sensitivityPeak: Type.Object({ advise: limit('ratio'), concession: limit('ratio') }, strict),
    separation: Type.Object({ advise: limit('ratio'), concession: limit('ratio') }, strict),
    outerRateOverBandwidth: limit('ratio'),
    deadTimePhaseDeg: degrees(),
    quantumRipplePercent: percent(),
    windingReserveK: limit('K', 500),
    overshootPercent: percent(),
    finalErrorCounts: limit('encoder counts'),
    limitCycleCounts: limit('encoder counts'),
    roundingPercent: Type.Object({ advise: percent(), concession: percent() }, strict),
    busLoadPercent: Type.Object({ advise: percent(), block: Type.Number({ minimum: 0, maximum: 100, description: 'percent' }) }, strict),
  },
  strict,
)
export type PolicyContent = Static<typeof PolicyContent>

/** What a machine begins with; sources stand beside each finding (server/modules/checks/findings). */
export const defaultPolicy: PolicyContent = {
  peerReviews: 1,
  concession: { longestDays: 366, mostBoards: 200 },
  mayPropose: { patch: 'controls engineer', minor: 'controls engineer', major: 'controls engineer' },
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

/** Something to read, without NUL, at which the database would cut it off. */
const Reason = Type.String({ minLength: 1, maxLength: 2000, pattern: '^(?=[^]*\\S)[^\\u0000]*$' })
export const ProposePolicy = Type.Object({ content: PolicyContent, reason: Reason }, strict)
export type ProposePolicy = Static<typeof ProposePolicy>
export const SignPolicy = Type.Object({ password: Type.String({ minLength: 1, maxLength: 200 }) }, strict)
export const DeclinePolicy = Type.Object({ reason: Reason }, strict)

/** What the signer of a policy states. */
export const policyStatement = 'I have read every limit of this policy and put it in force. I did not propose it.'

/** What of a policy contradicts itself, although each number fits: pointers into the content. */
export function policyContradictions(c: PolicyContent): { pointer: string; detail: string }[] {
  const pairs: [boolean, string, string][] = [
    [c.phaseMarginDeg.worst <= c.phaseMarginDeg.nominal, '/phaseMarginDeg/worst', 'is above the nominal limit'],
    [c.phaseMarginDeg.block <= c.phaseMarginDeg.worst, '/phaseMarginDeg/block', 'is above the limit for the worst case'],
    [c.gainMarginDb.worst <= c.gainMarginDb.nominal, '/gainMarginDb/worst', 'is above the nominal limit'],
    [c.sensitivityPeak.advise >= 1, '/sensitivityPeak/advise', 'is below 1, which no loop reaches'],
    [c.sensitivityPeak.advise <= c.sensitivityPeak.concession, '/sensitivityPeak/concession', 'is below the limit that advises'],
    [c.separation.concession <= c.separation.advise, '/separation/concession', 'is above the limit that advises'],
    [c.roundingPercent.advise <= c.roundingPercent.concession, '/roundingPercent/concession', 'is below the limit that advises'],
    [c.busLoadPercent.advise <= c.busLoadPercent.block, '/busLoadPercent/block', 'is below the limit that advises'],
  ]
  return pairs.filter(([holds]) => !holds).map(([, pointer, detail]) => ({ pointer, detail }))
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
  may: { sign: Allowed; decline: Allowed }
}

export interface MachinePolicyView {
  machine: string
  machineName: string
  inForce: PolicyView
  /** newest first, the one in force among them */
  versions: PolicyView[]
  may: { propose: Allowed }
}
