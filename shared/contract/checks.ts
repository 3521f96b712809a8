/** Levels of a finding, mildest first. */
export const findingLevels = ['pass', 'advise', 'concession needed', 'block'] as const
export type FindingLevel = (typeof findingLevels)[number]

export interface Finding {
  /** stable within a check: kind, loop, joints; a concession names it */
  key: string
  /** what is judged, such as "phase margin"; one name everywhere */
  kind: string
  level: FindingLevel
  /** keys of the joints it holds for; empty when it is about a bus or the machine */
  joints: string[]
  loop?: 'current' | 'velocity' | 'position'
  /** what was computed, in `unit`; null where the finding is not a figure */
  value: number | null
  limit: number | null
  unit: string
  /** one sentence: what was found */
  text: string
  /** one sentence: the consequence and the remedy; empty for a pass */
  remedy: string
  /** where the limit comes from */
  source: string
  /** RFC 6901 pointer into the machine set, where one place is to blame */
  pointer?: string
}

export type Verdict = 'stable' | 'unstable' | 'on the boundary'

export interface LoopFigures {
  verdict: Verdict
  gainMarginDb: number | null
  /** words when gainMarginDb is null: "above 60 dB", "unstable" */
  gainMarginReads: string
  gainMarginDownDb: number | null
  phaseMarginDeg: number | null
  phaseMarginReads: string
  delayMarginS: number | null
  sensitivityPeak: number | null
  bandwidthHz: number | null
}

export interface JointFigures {
  verdict: Verdict
  rho: number
  hyperperiodS: number
  decayRate: number
  /** null when the loop does not decay */
  slowestTimeConstantS: number | null
  eigenvalues: { re: number; im: number; decayRate: number; frequencyHz: number }[]
  loops: Partial<Record<'current' | 'velocity' | 'position', LoopFigures>>
}

/** The check of one joint: figures as it stands in the change and, where it stands there too, in the base release. */
export interface JointCheck {
  joint: string
  touched: boolean
  candidate: JointFigures | null
  released: JointFigures | null
  imageSha256: string | null
}

export interface CheckResult {
  inputsHash: string
  modelVersion: string
  policyNumber: number
  joints: JointCheck[]
  findings: Finding[]
  counts: Record<FindingLevel, number>
  verdict: Verdict | null
}

export interface CheckView extends CheckResult {
  checkedAt: string
}
