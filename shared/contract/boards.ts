import { Type, type Static } from '@sinclair/typebox'
import { Key, type Value } from '../parameters/machine-set.ts'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }

export const boardStates = ['current', 'outdated', 'withdrawn release on board', 'bench set on board', 'unknown', 'read-back differs', 'not calibrated for this joint'] as const
/** What is known of a board, told by what matters most first at the bench. */
export type BoardState = (typeof boardStates)[number]

/** How it is known what a board holds: a person said so, or its bytes were read and compared. */
export type HowKnown = 'recorded' | 'read back'

export const boardEventKinds = ['added', 'flash recorded', 'read-back verified', 'read-back differs', 'moved', 'bench set', 'retired'] as const
export type BoardEventKind = (typeof boardEventKinds)[number]

export const SerialNumber = Type.String({ pattern: '^[A-Za-z0-9][A-Za-z0-9._-]{0,39}$', maxLength: 40, description: 'serial number as it stands on the board' })
const Version = Type.String({ minLength: 1, maxLength: 60 })
const Note = Type.String({ maxLength: 500 })

/** Largest dump that is read. */
export const largestDumpBytes = 1_048_576

/** A dump of a board's registers as uploaded; the ending of its name says its format. */
export const Dump = Type.Object(
  {
    fileName: Type.String({ minLength: 1, maxLength: 200, description: 'ends in .bin, .hex, .srec or .csv' }),
    content: Type.String({ maxLength: 1_400_000, pattern: '^[A-Za-z0-9+/]*={0,2}$', description: 'the file in base64' }),
  },
  strict,
)
export type Dump = Static<typeof Dump>

export const RecordFlash = Type.Object({ serial: SerialNumber, joint: Key, release: Version, readBack: Type.Optional(Dump) }, strict)
export type RecordFlash = Static<typeof RecordFlash>

export const RecordMachine = Type.Object({ release: Version, boards: Type.Array(Type.Object({ joint: Key, serial: SerialNumber }, strict), { minItems: 1, maxItems: 1000 }) }, strict)
export type RecordMachine = Static<typeof RecordMachine>

/** Without a release: against the one that the board is recorded to hold. */
export const ReadBoardBack = Type.Object({ dump: Dump, release: Type.Optional(Version) }, strict)
export type ReadBoardBack = Static<typeof ReadBoardBack>

export const CompareDump = Type.Object({ release: Version, dump: Dump }, strict)
export type CompareDump = Static<typeof CompareDump>

/** Where a board sits, known or new. */
export const SeatBoard = Type.Object({ serial: SerialNumber, joint: Type.Union([Key, Type.Null()], { description: 'null: off its joint' }), note: Type.Optional(Note) }, strict)
export type SeatBoard = Static<typeof SeatBoard>

export const RetireBoard = Type.Object({ serial: Type.String({ maxLength: 40, description: 'the serial number, typed again' }), reason: Type.String({ minLength: 1, maxLength: 500, pattern: '\\S' }) }, strict)
export type RetireBoard = Static<typeof RetireBoard>

export const BoardTable = Type.Object({ text: Type.String({ minLength: 1, maxLength: 1_000_000 }) }, strict)
/** `decidedOn` is the hash of the preview that was looked at. */
export const ImportBoards = Type.Object({ text: Type.String({ minLength: 1, maxLength: 1_000_000 }), decidedOn: Type.String({ pattern: '^[0-9a-f]{64}$' }) }, strict)
export type ImportBoards = Static<typeof ImportBoards>

/** Where a board sits: the joint as the newest release of its machine has it; `bus` and `address` are null for a joint that this release left out. */
export interface BoardPlace {
  key: string
  name: string
  bus: string | null
  address: number | null
}

export interface BoardSummary {
  serial: string
  machine: string
  machineName: string
  /** null: off its joint, in a drawer */
  joint: BoardPlace | null
  firmware: string | null
  /** version of the release held, as known; null when nothing was recorded */
  release: string | null
  /** joint whose image it holds, when that is another one than where it sits */
  imageOf: string | null
  known: HowKnown | null
  knownAt: string | null
  knownBy: string | null
  state: BoardState
  /** one sentence */
  why: string
  retired: boolean
}

/** A value of a register that differs, in units; null where the bytes hold no value. */
export interface ValueDifference {
  parameter: string
  title: string
  unit: string
  found: Value | null
  expected: Value | null
}

export interface RegisterDifference {
  /** what the register is for, when it holds no parameter */
  kind: 'parameter' | 'checksum' | 'layout-id' | 'release'
  address: number
  /** hex, as it lies in memory */
  found: string
  expected: string
  values: ValueDifference[]
}

/** A dump compared with a release's image, register by register. */
export interface ReadBackResult {
  verdict: 'equal' | 'differs'
  /** the release that the dump was compared with */
  release: string
  joint: string
  revision: number
  fileName: string
  format: string
  /** of the file as uploaded */
  sha256: string
  /** bytes of registers that were compared, and of the image */
  comparedBytes: number
  imageBytes: number
  differences: RegisterDifference[]
  /** bytes that belong to no register and are not the fill */
  unexplained: { address: number; bytes: string }[]
  /** what makes no sense in the bytes, in words */
  findings: string[]
  /** sequence number found in the board's release register; null when the map has none */
  sequence: number | null
}

/** What a dump shows before anything is recorded. */
export interface DumpComparison extends ReadBackResult {
  /** another release whose image for the joint the dump equals */
  equals: string | null
}

export interface BoardEventView {
  id: number
  kind: BoardEventKind
  at: string
  person: string
  /** name of the bench key that recorded it; null for a person at a screen */
  benchKey: string | null
  joint: { key: string; name: string } | null
  /** joint that it left, by name */
  from: string | null
  release: string | null
  note: string
  readBack: ReadBackResult | null
}

export interface BoardView extends BoardSummary {
  /** newest first */
  events: BoardEventView[]
  /** version that its joint should hold now, if any */
  newest: string | null
  lastReadBack: ReadBackResult | null
  may: { record: Allowed; readBack: Allowed; move: Allowed; retire: Allowed }
}

export interface BoardList {
  boards: BoardSummary[]
  /** machines whose boards may be recorded */
  mayRecordOn: string[]
}

/** One joint of a machine with the board recorded there. */
export interface JointBoard {
  joint: string
  name: string
  bus: string
  address: number
  revision: number | null
  board: BoardSummary | null
  /** serial number that its board-bound values were measured on */
  calibratedFor: string | null
  state: BoardState
  why: string
  /** the last read-back of this board while it held what it holds; null: not read back */
  readBack: { verdict: 'equal' | 'differs'; at: string; by: string } | null
}

/** Which boards sat at a joint and what was recorded of them there, newest first. */
export interface JointBoards {
  board: BoardSummary | null
  state: BoardState
  why: string
  calibratedFor: string | null
  events: (BoardEventView & { serial: string })[]
}

/** A machine's boards against its release. */
export interface MachineBoards {
  machine: string
  machineName: string
  /** release that its boards should hold; null while there is none, or the newest is withdrawn */
  current: { version: string; sequence: number; releasedAt: string } | null
  newest: { version: string; withdrawn: boolean } | null
  joints: JointBoard[]
  /** boards of the machine that sit at no joint */
  off: BoardSummary[]
  counts: Record<BoardState, number>
  mayRecord: Allowed
}

export interface BoardTableRow {
  line: number
  serial: string
  joint: string | null
  release: string | null
  firmware: string | null
  /** what importing it does, in words; nothing when it stands so already */
  does: string[]
  /** what keeps it from being imported; null when nothing does */
  problem: string | null
}

export interface BoardTablePreview {
  rows: BoardTableRow[]
  /** rows that alter something */
  alters: number
  problems: number
  /** of this preview, to be sent with the import */
  hash: string
}

export interface CardRow {
  address: number
  /** hex, the whole word */
  bytes: string
  parameter: string
  title: string
  unit: string
  value: Value
  /** fields of a shared word: first bit and width */
  bit: number | null
  width: number | null
  boardBound: boolean
}

/** What a builder needs for one joint of one release, at the bench or on paper. */
export interface BenchCard {
  machine: string
  machineName: string
  version: string
  sequence: number
  state: 'current' | 'superseded' | 'withdrawn'
  joint: string
  name: string
  family: string
  bus: string
  address: number
  revision: number
  firmware: string
  imageSha256: string
  imageBytes: number
  /** first bytes of the image, hex */
  head: string
  /** value as the word that the register holds, hex */
  checksum: { algorithm: string; value: string; address: number } | null
  layoutId: string | null
  rows: CardRow[]
  calibratedFor: string | null
  board: BoardSummary | null
  /** why its values do not belong to the board on record there; null when they do */
  binding: string | null
  /** address of the release's page, for the QR code */
  releaseUrl: string
  may: { download: Allowed; record: Allowed }
}

/** A joint where somebody has to flash, read back or record. */
export interface BenchTask {
  machine: string
  machineName: string
  joint: string
  name: string
  bus: string
  address: number
  serial: string | null
  state: BoardState
  why: string
  /** version to flash; null when there is none */
  flash: string | null
}
