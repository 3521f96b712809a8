import type { EntityManager } from '@mikro-orm/core'
import type { Upload } from '../../http/receive-upload.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { attachImage, firmwareName, imageOf, type FirmwareImage, type FirmwareVersion } from './firmware-version.entity.ts'
import { sniffFirmware } from './sniff-firmware.ts'

interface Attaching {
  version: FirmwareVersion
  person: Person
  now: Date
}

/**
 * What an uploaded firmware image is; the slow half, before the transaction.
 *
 * @throws DomainError wrong-media-type, naming line, column or byte
 */
export async function readFirmwareImage({ file, name }: Upload): Promise<FirmwareImage> {
  const sniff = sniffFirmware(await file.content(), name)
  if (sniff.kind === 'refused') throw new DomainError('wrong-media-type', `${sniff.message} Nothing was attached; the draft is as it was.`, { fields: [{ pointer: '/image', detail: sniff.message }], extra: { line: sniff.line, column: sniff.column, byte: sniff.byte } })
  return { sha256: file.sha256, bytes: file.bytes, format: sniff.format, name }
}

/** Attaches a firmware image to a draft; its file is kept already. Whoever does so counts as one of its writers. */
export async function attachFirmwareImage(em: EntityManager, { version, image, person, now }: Attaching & { image: FirmwareImage }): Promise<void> {
  const before = imageOf(version)
  attachImage(version, image, person)
  await appendEntry(em, { at: now, person, act: 'firmware image attached', subject: { firmware: firmwareName(version) }, details: { ...image, ...(before ? { replaces: before.sha256 } : {}) } })
}

/** Takes a draft's firmware image away. @throws DomainError wrong-state */
export async function detachFirmwareImage(em: EntityManager, { version, person, now }: Attaching): Promise<void> {
  const before = imageOf(version)
  if (!before) throw new DomainError('wrong-state', `${firmwareName(version)} has no firmware image. Nothing was altered.`)
  attachImage(version, null, person)
  await appendEntry(em, { at: now, person, act: 'firmware image taken away', subject: { firmware: firmwareName(version) }, details: { sha256: before.sha256, name: before.name } })
}
