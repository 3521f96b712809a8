import { Type, type Static } from '@sinclair/typebox'
import type { Edit } from '../parameters/edits.ts'
import type { MachineSet } from '../parameters/machine-set.ts'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }

export const changeStates = ['draft', 'submitted', 'approved', 'released', 'cancelled'] as const
export type ChangeState = (typeof changeStates)[number]

/** Steps in the life of a change; `signature void` follows a return, a new base or a check that became stale. */
export type ChangeEventKind = 'drafted' | 'submitted' | 'peer review' | 'approved' | 'returned' | 'signature void' | 'brought up to date' | 'released' | 'cancelled' | 'writer invited'

const Title = Type.String({ minLength: 1, maxLength: 120, pattern: '\\S' })
const Reason = Type.String({ maxLength: 4000 })

/** A request to release with a finding outside policy. It is granted by the signatures on the change. */
export const ConcessionRequest = Type.Object(
  {
    finding: Type.String({ maxLength: 200, description: 'key of the finding it is for' }),
    characteristic: Type.String({ minLength: 1, maxLength: 200 }),
    limit: Type.String({ minLength: 1, maxLength: 200 }),
    reason: Type.String({ minLength: 1, maxLength: 2000 }),
    until: Type.Union([Type.String({ format: 'date' }), Type.Null()], { description: 'last day it holds' }),
    count: Type.Union([Type.Integer({ minimum: 1, maximum: 1_000_000 }), Type.Null()], { description: 'boards it may be flashed to' }),
  },
  strict,
)
export type ConcessionRequest = Static<typeof ConcessionRequest>

export const DraftChange = Type.Object({ machine: Type.String({ maxLength: 40 }), title: Title, reason: Type.Optional(Reason) }, strict)
export type DraftChange = Static<typeof DraftChange>

export const DescribeChange = Type.Object({ title: Type.Optional(Title), reason: Type.Optional(Reason), concessions: Type.Optional(Type.Array(ConcessionRequest, { maxItems: 200 })) }, strict)
export type DescribeChange = Static<typeof DescribeChange>

const Pointer = Type.String({ pattern: '^(?:/(?:[^~/]|~0|~1)*)+$', maxLength: 400 })

/** Edits of single values: each says what its writer saw there (`from`, absent where nothing stood), so that nobody overwrites unseen. */
export const EditValues = Type.Object(
  { edits: Type.Array(Type.Object({ pointer: Pointer, from: Type.Optional(Type.Unknown()), to: Type.Optional(Type.Unknown()) }, strict), { minItems: 1, maxItems: 5000 }) },
  strict,
)
export type EditValues = Static<typeof EditValues>

export const SaveText = Type.Object({ text: Type.String({ maxLength: 2_000_000 }) }, strict)
export const InviteWriter = Type.Object({ person: Type.Integer() }, strict)
export const GoBackTo = Type.Object({ point: Type.Integer({ minimum: 1 }) }, strict)
export const CancelChange = Type.Object({ reason: Type.String({ minLength: 1, maxLength: 2000, pattern: '\\S' }) }, strict)

export interface ChangeEventView {
  kind: ChangeEventKind
  person: string | null
  at: string
  note: string
}

export interface SignatureView {
  meaning: 'peer review' | 'release'
  statement: string
  person: string
  at: string
  contentHash: string
  void: boolean
}

/** One line of a list of changes. */
export interface ChangeSummary {
  /** machine key and number, such as "dunlin-47" */
  key: string
  machine: string
  machineName: string
  number: number
  title: string
  state: ChangeState
  /** how the small rail is drawn: the state, or what happened to it last */
  life: ChangeState | 'returned' | 'signature void'
  author: string
  writers: string[]
  baseVersion: string | null
  alteredAt: string
}

export interface ChangeView extends ChangeSummary {
  reason: string
  revision: number
  concessions: ConcessionRequest[]
  contentHash: string | null
  text: string
  set: MachineSet
  base: MachineSet
  events: ChangeEventView[]
  signatures: SignatureView[]
  /** peer reviews that the policy in force asks for */
  peerReviewsNeeded: number
  /** what a concession may ask by the policy in force; null: anything */
  concessionRules: { lastDay: string; mostBoards: number } | null
  may: Record<'edit' | 'submit' | 'cancel' | 'return' | 'signPeerReview' | 'release' | 'bringUpToDate' | 'inviteWriter' | 'takeBenchImage', Allowed>
}

export interface DraftPointView {
  number: number
  by: string
  at: string
  edits: Edit[]
}
