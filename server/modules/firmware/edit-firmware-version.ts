import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { editSchema, firmwareName, type FirmwareVersion } from './firmware-version.entity.ts'
import type { KnownSchema } from './schema-cache.ts'

interface Edit {
  version: FirmwareVersion
  schemaText: string
  /** the same text, read and found good */
  read: KnownSchema
  notes: string
  person: Person
  now: Date
}

/** Saves a draft's schema and notes. Whoever does so counts as one of its writers from here on. */
export async function editFirmwareVersion(em: EntityManager, edit: Edit): Promise<void> {
  const { version, person, now } = edit
  const before = version.schemaHash
  editSchema(version, { schemaText: edit.schemaText, schemaHash: edit.read.hash, notes: edit.notes }, person)
  await appendEntry(em, { at: now, person, act: 'firmware edited', subject: { firmware: firmwareName(version) }, details: { schemaHashBefore: before, schemaHash: version.schemaHash } })
}
