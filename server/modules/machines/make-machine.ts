import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { foundPolicy } from '../policy/found-policy.ts'
import { Machine } from './machine.entity.ts'

/**
 * Makes a machine, empty and with the first version of its policy. What it is made of comes with its first release.
 *
 * @throws DomainError already-exists when the key is taken, by a retired machine too: addresses and change keys never change hands
 */
export async function makeMachine(em: EntityManager, request: { key: string; name: string; description: string; person: Person; now: Date }): Promise<Machine> {
  const { key, person, now } = request
  if ((await em.count(Machine, { key })) > 0)
    throw new DomainError('already-exists', `There is a machine with the key "${key}" already, perhaps a retired one. Nothing was made; choose another key.`, { fields: [{ pointer: '/key', detail: 'is taken' }] })
  const name = request.name.trim()
  const machine = em.create(Machine, { key, name, description: request.description.trim(), createdAt: now })
  const policy = foundPolicy(em, machine, now)
  await em.flush()
  await appendEntry(em, { at: now, person, act: 'machine made', subject: { machine: key }, details: { name, policy: policy.number } })
  return machine
}
