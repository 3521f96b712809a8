import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { describe, FirmwareLine } from './firmware-line.entity.ts'

/** Gives a firmware line another name or description. Its key stays: joints name their firmware by it. */
export async function describeFirmwareLine(em: EntityManager, request: { line: FirmwareLine; name?: string; description?: string; person: Person; now: Date }): Promise<FirmwareLine> {
  const line = await em.findOneOrFail(FirmwareLine, { id: request.line.id }, { refresh: true })
  const before = { name: line.name, description: line.description }
  describe(line, request)
  await appendEntry(em, { at: request.now, person: request.person, act: 'firmware line described', subject: { firmware: line.key }, details: { before, after: { name: line.name, description: line.description } } })
  return line
}
