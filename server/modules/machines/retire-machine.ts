import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { Machine, retire } from './machine.entity.ts'
import { openChanges } from './open-changes.ts'

/**
 * Retires a machine: it stays readable, nothing is drafted on it any more.
 *
 * @throws DomainError invalid-request when the name typed again is another one; in-use while changes are open; wrong-state when it is retired
 */
export async function retireMachine(em: EntityManager, request: { machine: Machine; name: string; person: Person; now: Date }): Promise<Machine> {
  const machine = await em.findOneOrFail(Machine, { id: request.machine.id }, { refresh: true })
  if (request.name.trim() !== machine.name)
    throw new DomainError('invalid-request', `The name typed is not the name of this machine. Nothing was retired; type "${machine.name}" to retire it.`, { fields: [{ pointer: '/name', detail: 'is not the name of the machine' }] })
  const open = await openChanges(em, machine)
  if (open.length > 0) {
    const keys = open.map((c) => `${machine.key}-${c.number}`)
    throw new DomainError('in-use', `${machine.name} has ${open.length === 1 ? 'an unreleased change' : `${open.length} unreleased changes`}: ${keys.join(', ')}. Nothing was retired; release or cancel ${open.length === 1 ? 'it' : 'them'} first.`, { extra: { changes: keys } })
  }
  retire(machine, request.now)
  await appendEntry(em, { at: request.now, person: request.person, act: 'machine retired', subject: { machine: machine.key }, details: { name: machine.name } })
  return machine
}
