import { generateKeyPairSync, type KeyObject } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import { keyId, publicKeyPem } from '../../exports/sign-manifest.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Person } from '../people/person.entity.ts'
import type { KeyStore } from './key-store.ts'
import { WorkplaceKey } from './workplace-key.entity.ts'

/** What acts need of the workplace's key: the private half never leaves this. */
export interface WorkplaceKeys {
  /** signs kits */
  readonly current: KeyObject
  /**
   * Lays a new key beside the one in use and hands it to `write`, which puts its public half into the database; only when that answers true
   * is it taken into use.
   *
   * @throws DomainError wrong-state when another rotation is under way
   */
  rotate<T>(write: (next: KeyObject) => Promise<{ written: boolean; answer: T }>): Promise<T>
}

export const makeKey = (): KeyObject => generateKeyPairSync('ed25519').privateKey

/** The key that the database names as the one in use; null before the first. */
export async function newestKey(em: EntityManager): Promise<WorkplaceKey | null> {
  const [newest] = await em.find(WorkplaceKey, {}, { orderBy: { id: 'desc' }, limit: 1 })
  return newest ?? null
}

/** Puts the public half of a key into the database. */
export function keepPublicKey(em: EntityManager, key: KeyObject, { from, person }: { from: Date; person: Pick<Person, 'id'> | null }): WorkplaceKey {
  return em.create(WorkplaceKey, { keyId: keyId(key), publicKey: publicKeyPem(key), from, madeBy: person && em.getReference(Person, person.id) })
}

/** A key that no person asked for: the first one, or one in the place of a lost one. */
async function recordKey(em: EntityManager, key: KeyObject, at: Date, because: string): Promise<void> {
  const before = await newestKey(em)
  const row = keepPublicKey(em, key, { from: at, person: null })
  await appendEntry(em, { at, person: null, act: 'workplace key made', details: { keyId: row.keyId, ...(before ? { replaces: before.keyId } : {}), because } })
}

const namesDifferent = (row: WorkplaceKey, held: string) =>
  new Error(`The workplace's key file holds ${held}, which was replaced; the database names ${row.keyId} since ${row.from.toISOString()}. Put that key back, or take the file away: then a new key is made and recorded.`)

/**
 * The workplace's keys, opened: made at the first start, put right after a stop in the middle of a rotation, and made anew where the file
 * was lost (an old kit is proven by its public key, which the database keeps).
 *
 * @throws Error when the file holds a key that was replaced before
 */
export async function openWorkplaceKeys(em: EntityManager, store: KeyStore, at: Date): Promise<WorkplaceKeys> {
  const named = await newestKey(em)
  const held = store.inUse()
  const laid = store.laidBeside()
  const make = async (key: KeyObject, because: string) => {
    store.lay(key)
    await em.transactional((tx) => recordKey(tx, key, at, because))
    store.adopt()
  }
  if (held && named && keyId(held) === named.keyId) store.takeAway()
  else if (laid && named && keyId(laid) === named.keyId) store.adopt()
  else if (held) {
    if (named && (await em.count(WorkplaceKey, { keyId: keyId(held) })) > 0) throw namesDifferent(named, keyId(held))
    await em.transactional((tx) => recordKey(tx, held, at, 'the file held a key that the database did not know'))
  } else await make(makeKey(), named ? 'the key file was missing' : 'first start')
  return withStore(store)
}

function withStore(store: KeyStore): WorkplaceKeys {
  let current = store.inUse()!
  let rotating = false
  return {
    get current() {
      return current
    },
    async rotate(write) {
      if (rotating) throw new DomainError('wrong-state', 'Another rotation of the key is under way. Nothing was rotated; reload and look at the keys again.')
      rotating = true
      try {
        const next = makeKey()
        store.lay(next)
        const { written, answer } = await write(next)
        if (written) {
          store.adopt()
          current = next
        }
        return answer
      } finally {
        store.takeAway()
        rotating = false
      }
    },
  }
}
