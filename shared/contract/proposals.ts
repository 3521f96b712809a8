import { Type, type Static } from '@sinclair/typebox'
import type { Edit } from '../parameters/edits.ts'
import { JointKey, type Finding, type JointFigures, type Progress } from './checks.ts'

const strict = { additionalProperties: false }
const positive = (maximum: number) => Type.Number({ exclusiveMinimum: 0, maximum })

/** POST /changes/:change/check/starting-values: wanted closed-loop bandwidths, Hz; what is left out follows from the loop inside it. */
export const AskStartingValues = Type.Object(
  {
    joint: JointKey,
    bandwidthHz: Type.Optional(Type.Object({ current: Type.Optional(positive(1e5)), velocity: Type.Optional(positive(1e5)), position: Type.Optional(positive(1e5)) }, strict)),
    currentPhaseMarginDeg: Type.Optional(Type.Number({ minimum: 20, maximum: 85 })),
  },
  strict,
)
export type AskStartingValues = Static<typeof AskStartingValues>

/** Gains that a retune may move. */
export const retuneGains = ['K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic'] as const
export type RetuneGain = (typeof retuneGains)[number]

/** POST /changes/:change/check/retune: maximises the worst margin over the tolerance vertices. The same request again answers it as far as it is. */
export const AskRetune = Type.Object(
  {
    joint: JointKey,
    /** gain and how far it may move, as factors of what stands */
    gains: Type.Array(Type.Object({ gain: Type.Union(retuneGains.map((g) => Type.Literal(g))), from: positive(1), to: Type.Number({ minimum: 1, maximum: 100 }) }, strict), { minItems: 1, maxItems: 6 }),
    /** least bandwidth to keep, Hz; by default nine tenths of what stands */
    bandwidthHz: Type.Optional(Type.Object({ velocity: Type.Optional(positive(1e5)), position: Type.Optional(positive(1e5)), current: Type.Optional(positive(1e5)) }, strict)),
  },
  strict,
)
export type AskRetune = Static<typeof AskRetune>

/** Values proposed, never applied: edits ready to be put into the draft, and what the check says of them. */
export interface Proposal {
  joint: string
  /** joints that the edits reach: a family's value reaches every joint without its own */
  reaches: string[]
  /** what each gain follows from: "pole-zero cancellation, 60° wanted" */
  rules: { gain: RetuneGain; value: number; unit: string; rule: string; source: string }[]
  edits: Edit[]
  figures: JointFigures
  /** of this joint with the edits made; nominal ones alone where `figures.tolerance` is null */
  findings: Finding[]
}

export type StartingValuesView = { kind: 'proposed'; proposal: Proposal; others: Omit<Proposal, 'findings'>[] } | { kind: 'none'; why: string }

export interface RetuneView {
  hash: string
  progress: Progress
  /** null until done, or when nothing better was found: `why` says so then */
  proposal: Proposal | null
  why: string
}
