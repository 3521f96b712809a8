import { createHash, randomBytes } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import { Link, linkHours } from './link.entity.ts'
import type { Person } from './person.entity.ts'

export const secretHash = (secret: string) => createHash('sha256').update(secret).digest('hex')

export interface MadeLink {
  /** the address to open, with the secret: for the mail alone */
  address: string
  link: Link
}

/** A new single-use link for a person: an invitation while they have no password, else a reset. Only the hash of its secret is kept. */
export function makeLink(em: EntityManager, { person, baseUrl, askedBy, now }: { person: Person; baseUrl: string; askedBy: Person | null; now: Date }): MadeLink {
  const kind = isInvited(person) ? 'invitation' : 'reset'
  const secret = randomBytes(32).toString('base64url')
  const link = em.create(Link, { person, kind, secretHash: secretHash(secret), askedBy, createdAt: now, expiresAt: new Date(now.getTime() + linkHours[kind] * 3600_000) })
  return { address: `${baseUrl}/links/${secret}`, link }
}

/** Whether a person has no password yet; `passwordHash` must be loaded. */
export const isInvited = (person: Person) => (person.passwordHash ?? null) === null

/** Ends what links the person still has: called when one was used, and when the person is disabled. */
export async function endLinks(em: EntityManager, person: Person, now: Date): Promise<void> {
  await em.nativeUpdate(Link, { person, usedAt: null, expiresAt: { $gt: now } }, { expiresAt: now })
}
