import type { EntityManager } from '@mikro-orm/core'
import type { LinkUsed, LinkView } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { endSessions } from './end-sessions.ts'
import { passwordSetLetter } from './letters.ts'
import { Link, mustBeUsable, use } from './link.entity.ts'
import { endLinks, secretHash } from './make-link.ts'
import { isSigning } from './permissions.ts'
import { holdSigning } from './person.entity.ts'
import { RoleGrant } from './role-grant.entity.ts'

/**
 * The link that a secret opens.
 *
 * @throws DomainError not-found for a secret that never was one; link-used; link-expired
 */
export async function openLink(em: EntityManager, secret: string, now: Date): Promise<Link> {
  const link = await em.findOne(Link, { secretHash: secretHash(secret) }, { populate: ['person', 'person.passwordHash'], refresh: true })
  if (!link) throw new DomainError('not-found', 'This is no link of Detent; perhaps it was cut short. Nothing was altered; copy the whole address from the mail.')
  mustBeUsable(link, now)
  return link
}

export const presentLink = (link: Link): LinkView => ({ kind: link.kind, name: link.person.name, email: link.person.email, expiresAt: link.expiresAt.toISOString() })

/**
 * Sets a person's password by their link, once. Ends all their sessions and their other links; who holds a signing role
 * signs again only after another signer confirmed them.
 *
 * @param passwordHash  made before the transaction: hashing is slow
 * @throws DomainError as openLink
 */
export async function useLink(em: EntityManager, { secret, passwordHash, now }: { secret: string; passwordHash: string; now: Date }): Promise<LinkUsed> {
  const link = await openLink(em, secret, now)
  const { person } = link
  use(link, now)
  person.passwordHash = passwordHash
  const grants = await em.find(RoleGrant, { person, endedAt: null })
  // An invitation's holder can have confirmed roles only if they had a password before: then it is a reset in all but name.
  const signs = grants.some((g) => isSigning(g.role) && (link.kind === 'reset' || Boolean(g.confirmedAt)))
  if (signs) holdSigning(person, 'password reset')
  await em.flush()
  await endLinks(em, person, now)
  const sessions = await endSessions(em, person)
  if (link.kind === 'reset') queueMail(em, { person, ...passwordSetLetter(person, signs), now })
  await appendEntry(em, { at: now, person, act: 'password set', subject: { person: person.name }, details: { personId: person.id, by: link.kind, signingHold: person.signingHold ?? null, sessionsEnded: sessions } })
  return { email: person.email, signingHold: person.signingHold ?? null }
}
