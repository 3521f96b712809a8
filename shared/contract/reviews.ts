import { Type, type Static } from '@sinclair/typebox'
import type { Origin } from '../parameters/effective.ts'
import type { LoopName, Progress, Verdict } from './checks.ts'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }
export type SignatureMeaning = 'peer review' | 'release'

const Password = Type.String({ minLength: 1, maxLength: 200 })
const Hash = Type.String({ pattern: '^[0-9a-f]{64}$' })

export const statements: Record<SignatureMeaning, string> = {
  'peer review': 'I have read every value, its effect and the evidence, and I stand by this change. I took no part in writing it.',
  release: 'I grant the concessions listed and release these numbers to machines. I took no part in writing them.',
}

export const SignPeerReview = Type.Object({ password: Password, contentHash: Hash }, strict)
export type SignPeerReview = Static<typeof SignPeerReview>

export const SignRelease = Type.Object(
  { password: Password, contentHash: Hash, version: Type.String({ minLength: 5, maxLength: 60 }), stepReason: Type.Optional(Type.String({ maxLength: 2000 })) },
  strict,
)
export type SignRelease = Static<typeof SignRelease>

export const ReturnChange = Type.Object({ reason: Type.String({ minLength: 1, maxLength: 2000, pattern: '\\S' }) }, strict)
export type ReturnChange = Static<typeof ReturnChange>

/** What every row of the diff bears, whatever it is about. */
export interface Marked {
  /** names the row within the diff: "value:r3-knee:velocityGain" */
  key: string
  /** SHA-256 of what the row says: a row that says something else is unread again */
  hash: string
  /** RFC 6901 pointer into the machine set, for comments */
  pointer: string
}

/** One side of a row of the diff. */
export interface DiffSide {
  value: string
  origin: Origin
  /** as the register holds it: bytes in address order, hex */
  bytes: string
  /** null for values that are not numbers */
  number: number | null
}

export interface DiffRow extends Marked {
  /** parameter name, or "name", "firmware", "bus", "address", "family", "board" */
  parameter: string
  title: string
  unit: string
  role: string | null
  register: { address: number; encoding: string } | null
  before: DiffSide | null
  after: DiffSide | null
  changePercent: number | null
}

/** Joints of a family that alter alike, folded; what single ones have of their own stands under them. */
export interface DiffGroup {
  family: string
  joints: string[]
  /** rows that all these joints share, but for those with a row of their own */
  rows: DiffRow[]
  own: { joint: string; rows: DiffRow[] }[]
}

/** A field of a record that is no parameter: JSON text of both sides, plain text as it is. */
export interface FieldRow extends Marked {
  field: string
  before: string | null
  after: string | null
}

export interface DiffView {
  groups: DiffGroup[]
  joints: (Marked & { joint: string; is: 'added' | 'removed' })[]
  /** `field` is a letter of the drive train */
  driveTrains: { family: string; rows: FieldRow[] }[]
  /** what a family is called, and values it gives that no joint of it takes */
  families: { family: string; rows: FieldRow[] }[]
  buses: { bus: string; rows: FieldRow[] }[]
  counts: { values: number; joints: number; rows: number }
  textBefore: string
  textAfter: string
}

const Key = Type.String({ minLength: 1, maxLength: 200 })

/** Rows read, each as it was read. */
export const MarkRead = Type.Object({ rows: Type.Array(Type.Object({ key: Key, hash: Hash }, strict), { minItems: 1, maxItems: 20_000 }) }, strict)
export type MarkRead = Static<typeof MarkRead>

/** GET /changes/:change/reading: how far the reader is, and how far the others are. */
export interface ReadingView {
  /** keys of the rows that this person has read as they stand now */
  read: string[]
  rows: number
  /** everybody who has read some of it, this person among them */
  people: { name: string; read: number }[]
  may: { mark: Allowed }
}

/** What one altered value does when everything else stays as released. */
export interface ValueEffect {
  /** what moves most: "phase margin", "verdict", "torque at the clamp" */
  figure: string
  loop: LoopName | null
  unit: string
  /** the joint it moves most on, of those the row holds for */
  joint: string
  before: number | null
  after: number | null
  /** words where there is no number */
  beforeReads: string
  afterReads: string
  /** verdict of the loop with this value alone altered */
  verdict: Verdict
  /** limit of the policy in force, where it has one for this figure */
  policy: { limit: number; forbidden: 'below' | 'above' } | null
}

/** `none`: no figure of the loop moves, or there is nothing to compare with; `why` says which. */
export type RowEffect = { row: string } & ({ kind: 'effect'; effect: ValueEffect } | { kind: 'none'; why: string } | { kind: 'not yet' })

/** GET /changes/:change/effects: as far as they are computed. Asked again, it answers more. */
export interface EffectsView {
  effects: RowEffect[]
  progress: Progress
}
