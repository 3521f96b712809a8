import type { EntityManager } from '@mikro-orm/core'
import semver from 'semver'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Person } from '../people/person.entity.ts'
import { FirmwareLine } from './firmware-line.entity.ts'
import { firmwareName, FirmwareVersion } from './firmware-version.entity.ts'
import type { KnownSchema } from './schema-cache.ts'

/**
 * A version as joints can name it: SemVer 2.0.0 in its normal form, without build metadata.
 *
 * @throws DomainError version-refused
 */
export function mustBeVersion(version: string) {
  if (semver.valid(version) === version && /^[0-9A-Za-z.-]+$/.test(version)) return
  throw new DomainError('version-refused', `"${version}" is no version that joints can name. Nothing was saved; use the form 2.1.0 or 2.1.0-rc.1 (SemVer 2.0.0, without build metadata).`, {
    fields: [{ pointer: '/version', detail: 'is not SemVer 2.0.0, or carries build metadata' }],
  })
}

interface Draft {
  line: FirmwareLine
  version: string
  schemaText: string
  /** the same text, read and found good */
  read: KnownSchema
  notes: string
  person: Person
  now: Date
}

/** @throws DomainError version-refused, already-exists */
export async function draftFirmwareVersion(em: EntityManager, draft: Draft): Promise<FirmwareVersion> {
  mustBeVersion(draft.version)
  const line = await em.findOneOrFail(FirmwareLine, { id: draft.line.id })
  if ((await em.count(FirmwareVersion, { line, version: draft.version })) > 0)
    throw new DomainError('already-exists', `${line.key} ${draft.version} exists already. Nothing was saved; edit that version while it is a draft, or give this one another number.`, { fields: [{ pointer: '/version', detail: 'is taken' }] })
  const version = em.create(FirmwareVersion, {
    line,
    version: draft.version,
    state: 'draft',
    schemaText: draft.schemaText,
    schemaHash: draft.read.hash,
    notes: draft.notes,
    uploadedBy: em.getReference(Person, draft.person.id),
    writers: [draft.person.id],
    createdAt: draft.now,
  })
  await appendEntry(em, { at: draft.now, person: draft.person, act: 'firmware drafted', subject: { firmware: firmwareName(version) }, details: { schemaHash: draft.read.hash } })
  return version
}
