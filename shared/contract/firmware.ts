import { Type, type Static } from '@sinclair/typebox'
import type { Edit } from '../parameters/edits.ts'
import { Key, type Value } from '../parameters/machine-set.ts'
import type { SchemaComparison } from '../registers/compare-schemas.ts'
import type { CarryRules } from '../registers/parameter-schema.ts'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }
const SchemaText = Type.String({ maxLength: 2_000_000 })
const Notes = Type.String({ maxLength: 4000 })
const Name = Type.String({ minLength: 1, maxLength: 80, pattern: '\\S' })
const Description = Type.String({ maxLength: 400 })

/** A line's key: one character shorter than other keys, so that the firmware names of joints hold it. */
const LineKey = Type.String({ pattern: '^[a-z0-9](?:[a-z0-9-]{0,37}[a-z0-9])?$', maxLength: 39, description: 'lower-case letters, digits and hyphens' })

export const MakeFirmwareLine = Type.Object({ key: LineKey, name: Name, description: Description }, strict)
export type MakeFirmwareLine = Static<typeof MakeFirmwareLine>
export const DescribeFirmwareLine = Type.Object({ name: Type.Optional(Name), description: Type.Optional(Description) }, strict)
export type DescribeFirmwareLine = Static<typeof DescribeFirmwareLine>
export const DraftFirmwareVersion = Type.Object({ version: Type.String({ minLength: 5, maxLength: 40 }), schemaText: SchemaText, notes: Notes }, strict)
export type DraftFirmwareVersion = Static<typeof DraftFirmwareVersion>
export const EditFirmwareVersion = Type.Object({ schemaText: SchemaText, notes: Notes }, strict)
export type EditFirmwareVersion = Static<typeof EditFirmwareVersion>
const Hash = Type.String({ pattern: '^[0-9a-f]{64}$' })
/** Publishing and retiring re-enter the password over the hashes of the schema and of the firmware image; null where the version has no image. */
export const SignFirmwareVersion = Type.Object({ password: Type.String({ minLength: 1, maxLength: 200 }), schemaHash: Hash, imageHash: Type.Union([Hash, Type.Null()]) }, strict)
export type SignFirmwareVersion = Static<typeof SignFirmwareVersion>

/** Most bytes a firmware image may have. */
export const firmwareImageLimit = 8 * 1024 * 1024

/** The firmware itself, as it was uploaded. */
export interface FirmwareImageView {
  sha256: string
  bytes: number
  format: 'bin' | 'hex'
  /** as its uploader called it */
  name: string
}

export interface FirmwareVersionSummary {
  line: string
  version: string
  state: 'draft' | 'published' | 'retired'
  schemaHash: string
  uploadedBy: string
  publishedBy: string | null
  publishedAt: string | null
  parameters: number
  /** length of the register image */
  imageBytes: number
  firmwareImage: FirmwareImageView | null
}

export interface FirmwareLineView {
  key: string
  name: string
  description: string
  /** newest version first */
  versions: FirmwareVersionSummary[]
  may: { draftVersion: Allowed; describe: Allowed }
}

/** A parameter of a firmware version, in short; the schema says the rest. */
export interface FirmwareParameter {
  name: string
  title: string
  unit: string
  kind: 'number' | 'integer' | 'boolean' | 'enum'
  role: string | null
  boardBound: boolean
  default: Value | null
  minimum: number | null
  maximum: number | null
  choices: (string | number)[] | null
  /** null for a constant of the firmware */
  register: { address: number; bytes: number; encoding: string; access: 'rw' | 'ro' | 'wo'; bit: number | null; width: number | null } | null
}

export interface FirmwareVersionView extends FirmwareVersionSummary {
  lineName: string
  schemaText: string
  notes: string
  revision: number
  /** names of everybody who wrote in it, the uploader first; each counts as an author of changes that move a joint to it */
  writers: string[]
  createdAt: string
  retiredBy: string | null
  retiredAt: string | null
  /** by register address, constants last */
  parameterList: FirmwareParameter[]
  image: { base: number; length: number; addressWidth: 8 | 16 }
  /** what is allowed but worth a second look, with pointers into the schema */
  advice: { pointer: string; message: string }[]
  may: { edit: Allowed; publish: Allowed; retire: Allowed; downloadImage: Allowed }
}

/** What differs between two versions of a line. */
export interface FirmwareComparisonView extends SchemaComparison {
  line: string
  lineName: string
  before: { version: string; state: FirmwareVersionSummary['state']; schemaHash: string }
  after: { version: string; state: FirmwareVersionSummary['state']; schemaHash: string }
  /** title and unit of every parameter that differs, as the later version has them (of a removed one, the earlier) */
  titles: Record<string, { title: string; unit: string }>
  /** the later version's rules for carrying a set over, when they start at the earlier one */
  carry: CarryRules | null
  schemaTextBefore: string
  schemaTextAfter: string
}

/** Moves joints to another version of their firmware line: the named joints, or every joint of a family. */
const CarryTarget = Type.String({ maxLength: 80, description: 'firmware line and version, such as "hinge 2.1.0"' })
export const CarryOver = Type.Object(
  {
    to: CarryTarget,
    joints: Type.Optional(Type.Array(Key, { minItems: 1, maxItems: 1000, uniqueItems: true })),
    family: Type.Optional(Key),
    /** `seen` of the preview that was read */
    seen: Hash,
  },
  strict,
)
export type CarryOver = Static<typeof CarryOver>

/** One value on its way to the other version. */
export interface CarryRow {
  /** whose value it is */
  place: 'family' | 'joint'
  key: string
  kind: 'kept' | 'renamed' | 'converted' | 'added' | 'dropped'
  /** name and unit before; null for an added value */
  from: string | null
  fromUnit: string
  /** name and unit now; null for a dropped value */
  to: string | null
  toUnit: string
  before: Value | null
  after: Value | null
  /** the change of unit has no finite decimal; the nearest double was taken */
  rounded: boolean
}

export interface CarryOverPreview {
  to: string
  /** joints that move, with the version they come from */
  joints: { joint: string; name: string; from: string }[]
  rows: CarryRow[]
  /** values that come from the firmware before and after, and differ: nobody typed them */
  defaults: { parameter: string; title: string; unit: string; before: Value; after: Value; joints: string[] }[]
  /** what needs a person: it stays as it stands */
  problems: { pointer: string; detail: string }[]
  edits: Edit[]
  /** SHA-256 of the edits, to be sent with the acceptance */
  seen: string
}
