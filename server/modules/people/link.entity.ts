import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { Person } from './person.entity.ts'

/** A single-use, expiring link to set a password: an invitation or a reset. Only the hash of its secret is kept here. */
export const Link = defineEntity({
  name: 'Link',
  properties: {
    id: p.integer().primary(),
    person: () => p.manyToOne(Person),
    kind: p.string().$type<'invitation' | 'reset'>(),
    secretHash: p.string().length(64).unique(),
    /** the administrator who asked for it; null when the person did, or nobody was there to ask */
    askedBy: () => p.manyToOne(Person).nullable(),
    createdAt: p.datetime(),
    expiresAt: p.datetime(),
    usedAt: p.datetime().nullable(),
  },
})
export type Link = InferEntity<typeof Link>

/** Hours a link can be used in. */
export const linkHours = { invitation: 72, reset: 2 } as const

const words = (link: Link) => (link.kind === 'invitation' ? 'invitation' : 'reset link')

/** @throws DomainError link-used, link-expired */
export function mustBeUsable(link: Link, now: Date) {
  if (link.usedAt) throw new DomainError('link-used', `This ${words(link)} was used already. Nothing was altered; sign in with the password set by it, or ask for a reset.`)
  if (link.expiresAt <= now) throw new DomainError('link-expired', `This ${words(link)} can't be used any more: it holds for ${linkHours[link.kind]} hours. Nothing was altered; ask for a new one.`)
}

export function use(link: Link, now: Date) {
  mustBeUsable(link, now)
  link.usedAt = now
}
