import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { Person } from '../people/person.entity.ts'
import { firmwareName, publish, retire, type FirmwareVersion } from './firmware-version.entity.ts'

interface Signing {
  version: FirmwareVersion
  /** of the schema that the signer read */
  schemaHash: string
  /** of the firmware image that the signer saw; null for none */
  imageHash: string | null
  /** signed in and password re-entered */
  person: Person
  now: Date
}

/** @throws DomainError content-differs when schema or image is not the one that was read */
function mustBeRead({ version, schemaHash, imageHash }: Signing, act: string) {
  const differs = (what: string, pointer: string, now: string) =>
    new DomainError('content-differs', `The ${what} of ${firmwareName(version)} is not the one you read. Nothing was ${act}; reload, read what is new, then decide again.`, { fields: [{ pointer, detail: `is ${now} now` }] })
  if (version.schemaHash !== schemaHash) throw differs('schema', '/schemaHash', version.schemaHash)
  if ((version.imageSha256 ?? null) !== imageHash) throw differs('firmware image', '/imageHash', version.imageSha256 ?? 'none')
}

async function leaveTraces(em: EntityManager, { version, person, now }: Signing, act: 'published' | 'retired') {
  const name = firmwareName(version)
  await appendEntry(em, { at: now, person, act: `firmware ${act}`, subject: { firmware: name }, details: { schemaHash: version.schemaHash, imageHash: version.imageSha256 ?? null } })
  const consequence = act === 'published' ? 'Its schema can no longer be edited; changes can move joints to it. You count as an author of those changes.' : 'Changes can no longer move joints to it; releases that hold it stay as they are.'
  for (const writer of await em.find(Person, { id: { $in: version.writers }, disabledAt: null }))
    queueMail(em, { person: writer, topic: 'firmware', subject: `${name} is ${act}`, text: `${person.name} ${act} ${name}, with the schema ${version.schemaHash}${version.imageSha256 ? ` and the firmware image ${version.imageSha256}` : ' and without a firmware image'}.\n\n${consequence}\n`, now })
}

/**
 * Publishes a draft: from here on it is never edited, only retired.
 *
 * @throws DomainError own-work, wrong-state, content-differs
 */
export async function publishFirmwareVersion(em: EntityManager, signing: Signing): Promise<void> {
  publish(signing.version, em.getReference(Person, signing.person.id), signing.now)
  mustBeRead(signing, 'published')
  await leaveTraces(em, signing, 'published')
}

/**
 * Retires a published version: no change moves a joint to it any more.
 *
 * @throws DomainError own-work, wrong-state, content-differs
 */
export async function retireFirmwareVersion(em: EntityManager, signing: Signing): Promise<void> {
  retire(signing.version, em.getReference(Person, signing.person.id), signing.now)
  mustBeRead(signing, 'retired')
  await leaveTraces(em, signing, 'retired')
}
