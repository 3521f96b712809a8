import { Type, type Static } from '@sinclair/typebox'
import type { Origin } from '../parameters/effective.ts'

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

/** One side of a row of the diff. */
export interface DiffSide {
  value: string
  origin: Origin
  /** as the register holds it: bytes in address order, hex */
  bytes: string
  /** null for values that are not numbers */
  number: number | null
}

export interface DiffRow {
  /** parameter name, or "firmware", "bus", "address", "family", "board" */
  parameter: string
  title: string
  unit: string
  role: string | null
  register: { address: number; encoding: string } | null
  before: DiffSide | null
  after: DiffSide | null
  changePercent: number | null
}

/** Joints whose rows are the same are folded into one group. */
export interface DiffGroup {
  family: string
  joints: string[]
  rows: DiffRow[]
}

export interface DiffView {
  groups: DiffGroup[]
  driveTrains: { family: string; rows: { letter: string; before: string | null; after: string | null }[] }[]
  buses: { bus: string; rows: { field: string; before: string | null; after: string | null }[] }[]
  jointsAdded: string[]
  jointsRemoved: string[]
  textBefore: string
  textAfter: string
}
