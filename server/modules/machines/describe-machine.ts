import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { describe, Machine } from './machine.entity.ts'

/** Gives a machine another name or description. Its key stays. */
export async function describeMachine(em: EntityManager, request: { machine: Machine; name?: string; description?: string; person: Person; now: Date }): Promise<Machine> {
  const machine = await em.findOneOrFail(Machine, { id: request.machine.id }, { refresh: true })
  const before = { name: machine.name, description: machine.description }
  describe(machine, request)
  const after = { name: machine.name, description: machine.description }
  await appendEntry(em, { at: request.now, person: request.person, act: 'machine described', subject: { machine: machine.key }, details: { before, after } })
  return machine
}
