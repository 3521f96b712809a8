import { Type, type Static } from '@sinclair/typebox'
import type { EffectiveValue } from '../parameters/effective.ts'
import type { BusSettings, DriveTrain, FamilySettings, JointSettings, Value } from '../parameters/machine-set.ts'
import { Key } from '../parameters/machine-set.ts'
import type { ChangeSummary } from './changes.ts'
import type { LedgerEntryView } from './ledger.ts'
import type { Allowed } from './people.ts'
import type { ReleaseSummary } from './releases.ts'

const strict = { additionalProperties: false }
const Name = Type.String({ minLength: 1, maxLength: 80, pattern: '\\S' })
const Description = Type.String({ maxLength: 400 })

export const MakeMachine = Type.Object({ key: Key, name: Name, description: Description }, strict)
export type MakeMachine = Static<typeof MakeMachine>
export const DescribeMachine = Type.Object({ name: Type.Optional(Name), description: Type.Optional(Description) }, strict)
export type DescribeMachine = Static<typeof DescribeMachine>
export const RetireMachine = Type.Object({ name: Type.String({ maxLength: 80, description: 'the name, typed again' }) }, strict)
export type RetireMachine = Static<typeof RetireMachine>

/** The release whose set is shown: the newest. Withdrawn, it is shown all the same, marked, until the next one; null before the first. */
export interface ShownRelease {
  version: string
  sequence: number
  withdrawn: boolean
}

export interface MachineSummary {
  key: string
  name: string
  description: string
  retired: boolean
  joints: number
  buses: number
  currentVersion: string | null
  openChanges: number
}

/** A joint as the shown release holds it. */
export interface JointSummary {
  key: string
  name: string
  family: string
  familyName: string
  bus: string
  address: number
  firmware: string
  revision: number | null
  mode: string | null
  /** joint values of its own, counted */
  ownValues: number
  /** unreleased changes that touch it */
  waiting: { change: string; state: ChangeSummary['life'] }[]
}

export interface BusSummary {
  key: string
  joints: number
  settings: BusSettings
  /** addresses at which two boards answer */
  doubled: number[]
}

export interface MachineView extends MachineSummary {
  shown: ShownRelease | null
  currentRelease: ReleaseSummary | null
  busList: BusSummary[]
  familyList: { key: string; name: string; joints: number; driveTrainNumber: number | null }[]
  jointList: JointSummary[]
  changes: ChangeSummary[]
  lastActs: LedgerEntryView[]
  may: { draftChange: Allowed; describe: Allowed; retire: Allowed }
}

/** An effective value with what the firmware version's schema says of it. */
export interface ParameterValue extends EffectiveValue {
  title: string
  description: string
  unit: string
  role: string | null
  boardBound: boolean
  minimum: number | null
  maximum: number | null
  familyValue: Value | null
  firmwareDefault: Value | null
  /** null for a constant of the firmware */
  register: { address: number; encoding: string; access: string; bit: number | null; width: number | null } | null
  /** the whole word as it lies in memory, hex; empty where no register holds the value */
  bytes: string
  /** what the board will see; null where no register holds the value */
  physical: Value | null
  /** rounding error in the value's unit, and relative to the typed value (null when that is 0 and the error is not) */
  errorAbsolute: number | null
  errorRelative: number | null
}

export interface JointView extends JointSummary {
  machine: string
  machineName: string
  shown: ShownRelease
  settings: JointSettings
  familySettings: FamilySettings
  busSettings: BusSettings
  driveTrain: DriveTrain
  driveTrainNumber: number | null
  values: ParameterValue[]
  /** why the values can't be encoded by their schema; empty for whatever a release holds, unless its firmware is gone */
  problems: { pointer: string; detail: string }[]
  imageSha256: string | null
  /** its revisions, newest first, each with the release that brought it */
  history: { revision: number; release: string; sequence: number; at: string; change: string; title: string }[]
}

export interface FamilyView {
  machine: string
  machineName: string
  shown: ShownRelease
  key: string
  settings: FamilySettings
  driveTrainNumber: number | null
  driveTrainHistory: { number: number; at: string; driveTrain: DriveTrain }[]
  joints: JointSummary[]
  /** value of each parameter across the joints: the family's, and who departs from it */
  values: { name: string; title: string; unit: string; role: string | null; familyValue: Value | null; firmwareDefault: Value | null; own: { joint: string; value: Value }[] }[]
}

export interface Tap {
  address: number
  joint: string | null
  name: string
  /** the address lies in a reserved range */
  reserved: boolean
}

export interface BusView {
  machine: string
  machineName: string
  shown: ShownRelease
  key: string
  settings: BusSettings
  /** what answers on the bus, by address; `joint` is null for other devices */
  taps: Tap[]
  doubled: number[]
  /** ranges that the bus keeps for itself, ends included */
  reserved: { from: number; to: number }[]
  /** addresses at which a board may still be put */
  free: number
  /** bytes of the register address of each joint's board, by joint */
  addressBytes: Record<string, number>
  /** addresses that open changes put boards at, which the release shown does not */
  claims: BusClaim[]
  /** addresses that changes would take from each other, or from a joint that stays */
  contested: { address: number; claims: BusClaim[]; holder: string | null }[]
  /** limits of the policy in force, % */
  loadPercent: { advise: number; block: number }
}

/** An address that an open change gives a joint. */
export interface BusClaim {
  change: string
  title: string
  state: ChangeSummary['state']
  joint: string
  name: string
  address: number
}
