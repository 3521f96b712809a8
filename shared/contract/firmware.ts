import { Type, type Static } from '@sinclair/typebox'
import type { Value } from '../parameters/machine-set.ts'
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
/** Publishing and retiring re-enter the password over the schema's hash. */
export const SignFirmwareVersion = Type.Object({ password: Type.String({ minLength: 1, maxLength: 200 }), schemaHash: Type.String({ pattern: '^[0-9a-f]{64}$' }) }, strict)
export type SignFirmwareVersion = Static<typeof SignFirmwareVersion>

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
  may: { edit: Allowed; publish: Allowed; retire: Allowed }
}
