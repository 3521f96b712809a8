import type { EntityManager } from '@mikro-orm/core'
import type { ChangeEventKind } from '../../../shared/contract/changes.ts'
import { Person } from '../people/person.entity.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { ChangeEvent } from './change-event.entity.ts'
import type { Change } from './change.entity.ts'
import { changeKey } from './locate.ts'

/** What every act on a change leaves behind: a step in its life and an entry in the ledger. */
export async function addEvent(em: EntityManager, change: Change, event: { kind: ChangeEventKind; person: Person | null; at: Date; note?: string; details?: Record<string, unknown> }) {
  em.create(ChangeEvent, { change, kind: event.kind, person: event.person ? em.getReference(Person, event.person.id) : null, at: event.at, note: event.note ?? '' })
  await appendEntry(em, {
    at: event.at,
    person: event.person,
    act: `change ${event.kind}`,
    subject: { machine: change.machine.key, change: changeKey(change) },
    details: { title: change.title, ...(event.note ? { note: event.note } : {}), ...event.details },
  })
}
