import type { KeyObject } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import type { Person } from '../people/person.entity.ts'
import { appendEntry } from './append-entry.ts'
import { keepCheckpoint } from './keep-checkpoint.ts'

/** Signs the ledger's end because somebody asked; that they asked is its last entry. */
export async function signCheckpointNow(em: EntityManager, { key, person, now }: { key: KeyObject; person: Person; now: Date }): Promise<void> {
  await appendEntry(em, { at: now, person, act: 'checkpoint signed' })
  await keepCheckpoint(em, { key, now, occasion: 'asked' })
}
