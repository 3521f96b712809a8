import { Type, type Static } from '@sinclair/typebox'
import type { Allowed } from './people.ts'

/** One entry of the ledger, as read. */
export interface LedgerEntryView {
  sequence: number
  at: string
  person: string
  act: string
  machine: string | null
  subject: Record<string, string | number>
  details: Record<string, unknown>
  hash: string
  previousHash: string
}

export interface LedgerPage {
  entries: LedgerEntryView[]
  /** sequence to ask before for the next page; null at the end */
  next: number | null
  /** entries that the reader may read and that fit what was asked */
  total: number
  /** every act that stands in the ledger, for the filter */
  acts: string[]
}

export type LedgerVerdict = { holds: true; entries: number; lastHash: string } | { holds: false; entries: number; sequence: number; why: string }

/** When checkpoints are signed: once a day, with each release and each backup, and when somebody asks. */
export const checkpointOccasions = ['daily', 'release', 'backup', 'asked'] as const
export type CheckpointOccasion = (typeof checkpointOccasions)[number]

/** The ledger's end at a moment, signed. */
export interface CheckpointView {
  /** of the last entry at that moment */
  sequence: number
  hash: string
  at: string
  occasion: CheckpointOccasion
  keyId: string
}

export interface CheckpointPage {
  /** newest first; the newest ones only */
  checkpoints: CheckpointView[]
  total: number
  may: { sign: Allowed }
}

/** An exported file of checkpoints, to be held against the ledger. */
export const HeldCheckpoints = Type.Object({ checkpoints: Type.String({ minLength: 1, maxLength: 3_000_000 }) }, { additionalProperties: false })
export type HeldCheckpoints = Static<typeof HeldCheckpoints>

export type CheckpointsVerdict =
  | { holds: true; checkpoints: number; /** of the newest one; null when there is none */ newest: string | null; /** entries that a signature vouches for */ upTo: number }
  | { holds: false; checkpoints: number; /** of the file, from 1 */ line: number; why: string; /** last entry that a checkpoint before it vouches for; 0: none */ goodUpTo: number }
