import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Place } from '../../http/route.ts'
import { Machine } from '../machines/machine.entity.ts'
import { Change } from './change.entity.ts'

export interface OnChange extends Place {
  machine: string
  change: Change
}

/** A change's key: its machine's key and its number, such as "dunlin-47". */
export const changeKey = (change: Change) => `${change.machine.key}-${change.number}`

/**
 * The change that a path names as `:change`.
 *
 * @throws DomainError not-found
 */
export async function onChange(em: EntityManager, params: Record<string, string>): Promise<OnChange> {
  const change = await findChange(em, params.change)
  if (!change) throw new DomainError('not-found', 'There is nothing at this address that you may read. Check the address, or ask an administrator for a role on the machine.')
  return { machine: change.machine.key, subject: { machine: change.machine.key, change: changeKey(change) }, change }
}

export async function findChange(em: EntityManager, key: string): Promise<Change | null> {
  const match = /^(.+)-(\d{1,9})$/.exec(key)
  const machine = match && (await em.findOne(Machine, { key: match[1] }))
  return machine ? em.findOne(Change, { machine, number: Number(match[2]) }, { populate: ['machine', 'author', 'baseRelease'] }) : null
}

/** The same change, fresh inside an act's transaction. */
export async function again(em: EntityManager, change: Change): Promise<Change> {
  return em.findOneOrFail(Change, { id: change.id }, { populate: ['machine', 'author', 'baseRelease'], refresh: true })
}
