import { FirmwareLine } from '../../server/modules/firmware/firmware-line.entity.ts'
import { FirmwareVersion, type FirmwareState } from '../../server/modules/firmware/firmware-version.entity.ts'
import { hashOf } from '../../server/modules/firmware/schema-cache.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { smallSchema } from './small-schema.ts'
import type { Workplace } from './workplace.ts'

export interface FirmwareToMake {
  line?: string
  version?: string
  state?: FirmwareState
  /** as a document; kept as its text */
  schema?: object
  uploadedBy?: Person
  publishedBy?: Person
}

/** Puts a firmware version straight into the database, with its line and people as far as they are missing. */
export async function aFirmware(w: Workplace, { line: key = 'hinge', version = '2.1.0', state = 'published', schema = smallSchema, uploadedBy, publishedBy }: FirmwareToMake = {}): Promise<FirmwareVersion> {
  const by = uploadedBy ?? (await w.person('Firmware Author', [['controls engineer', null]]))
  const signer = state === 'draft' ? null : (publishedBy ?? (await w.person('Firmware Signer', [['release manager', null]])))
  const em = w.orm.em.fork()
  const now = w.services.now()
  const line = (await em.findOne(FirmwareLine, { key })) ?? em.create(FirmwareLine, { key, name: `${key} board`, description: '', createdAt: now })
  const made = em.create(FirmwareVersion, {
    line,
    version,
    state,
    schemaText: JSON.stringify(schema, null, 2),
    schemaHash: hashOf(schema),
    notes: '',
    uploadedBy: em.getReference(Person, by.id),
    writers: [by.id],
    createdAt: now,
    publishedBy: signer && em.getReference(Person, signer.id),
    publishedAt: signer && now,
    retiredBy: state === 'retired' && signer ? em.getReference(Person, signer.id) : null,
    retiredAt: state === 'retired' ? now : null,
  })
  await em.flush()
  return made
}
