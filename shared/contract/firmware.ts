import { Type, type Static } from '@sinclair/typebox'
import { Key } from '../parameters/machine-set.ts'
import type { Allowed } from './people.ts'

const strict = { additionalProperties: false }
const SchemaText = Type.String({ maxLength: 2_000_000 })
const Notes = Type.String({ maxLength: 4000 })

export const MakeFirmwareLine = Type.Object({ key: Key, name: Type.String({ minLength: 1, maxLength: 80, pattern: '\\S' }), description: Type.String({ maxLength: 400 }) }, strict)
export type MakeFirmwareLine = Static<typeof MakeFirmwareLine>
export const DescribeFirmwareLine = Type.Object({ name: Type.Optional(Type.String({ minLength: 1, maxLength: 80, pattern: '\\S' })), description: Type.Optional(Type.String({ maxLength: 400 })) }, strict)
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
  imageBytes: number
}

export interface FirmwareLineView {
  key: string
  name: string
  description: string
  versions: FirmwareVersionSummary[]
  may: { draftVersion: Allowed; describe: Allowed }
}

export interface FirmwareVersionView extends FirmwareVersionSummary {
  lineName: string
  schemaText: string
  notes: string
  revision: number
  retiredBy: string | null
  may: { edit: Allowed; publish: Allowed; retire: Allowed }
}
