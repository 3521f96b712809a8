import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { FirmwareLine } from './firmware-line.entity.ts'

/** @throws DomainError already-exists */
export async function makeFirmwareLine(em: EntityManager, request: { key: string; name: string; description: string; person: Person; now: Date }): Promise<FirmwareLine> {
  const { key, person, now } = request
  if ((await em.count(FirmwareLine, { key })) > 0)
    throw new DomainError('already-exists', `There is a firmware line with the key "${key}" already. Nothing was made; choose another key, or draft a version of that line.`, { fields: [{ pointer: '/key', detail: 'is taken' }] })
  const line = em.create(FirmwareLine, { key, name: request.name.trim(), description: request.description.trim(), createdAt: now })
  await appendEntry(em, { at: now, person, act: 'firmware line made', subject: { firmware: key }, details: { name: line.name } })
  return line
}
