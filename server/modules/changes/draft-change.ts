import type { EntityManager } from '@mikro-orm/core'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { printSet } from '../../../shared/parameters/set-text.ts'
import { DomainError } from '../../http/errors.ts'
import { newestRelease } from '../machines/current-release.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Person } from '../people/person.entity.ts'
import { addEvent } from './add-event.ts'
import { Change } from './change.entity.ts'
import { DraftPoint } from './draft-point.entity.ts'

/** Opens a change on the machine's newest release; on a machine without one, from nothing. */
export async function draftChange(em: EntityManager, request: { machine: Machine; title: string; reason?: string; person: Person; now: Date }): Promise<Change> {
  const machine = await em.findOneOrFail(Machine, { id: request.machine.id }, { refresh: true })
  if (machine.retiredAt) throw new DomainError('wrong-state', `${machine.name} is retired; nothing is drafted on it any more. Nothing was made.`)
  const base = await newestRelease(em, machine)
  machine.lastChange += 1
  const text = printSet(base?.set ?? emptySet())
  const person = em.getReference(Person, request.person.id)
  const change = em.create(Change, {
    machine,
    number: machine.lastChange,
    title: request.title.trim(),
    reason: request.reason ?? '',
    state: 'draft',
    author: person,
    writers: [request.person.id],
    baseRelease: base,
    text,
    concessions: [],
    createdAt: request.now,
    alteredAt: request.now,
  })
  em.create(DraftPoint, { change, number: 1, by: person, at: request.now, text, edits: [] })
  await em.flush()
  await addEvent(em, change, { kind: 'drafted', person: request.person, at: request.now, details: { base: base?.version ?? null } })
  return change
}
