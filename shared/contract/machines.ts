import { Type, type Static } from '@sinclair/typebox'
import type { EffectiveValue } from '../parameters/effective.ts'
import type { BusSettings, DriveTrain, FamilySettings, JointSettings } from '../parameters/machine-set.ts'
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

/** A joint as the current release holds it. */
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
  settings: BusSettings
  /** addresses at which two boards answer */
  doubled: number[]
}

export interface MachineView extends MachineSummary {
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
  familyValue: unknown
  firmwareDefault: unknown
  register: { address: number; encoding: string; access: string } | null
  bytes: string
}

export interface JointView extends JointSummary {
  machine: string
  machineName: string
  settings: JointSettings
  familySettings: FamilySettings
  busSettings: BusSettings
  driveTrain: DriveTrain
  driveTrainNumber: number | null
  values: ParameterValue[]
  imageSha256: string | null
  history: { revision: number; release: string; sequence: number; at: string; change: string; title: string }[]
}

export interface FamilyView {
  machine: string
  machineName: string
  key: string
  settings: FamilySettings
  driveTrainNumber: number | null
  driveTrainHistory: { number: number; at: string; driveTrain: DriveTrain }[]
  joints: JointSummary[]
  /** value of each parameter across the joints: the family's, and who departs from it */
  values: { name: string; title: string; unit: string; familyValue: unknown; firmwareDefault: unknown; own: { joint: string; value: unknown }[] }[]
}

export interface BusView {
  machine: string
  machineName: string
  key: string
  settings: BusSettings
  taps: { address: number; joint: string | null; name: string; reserved: boolean }[]
  doubled: number[]
  free: number
}
