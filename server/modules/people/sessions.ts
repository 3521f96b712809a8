import { createHash } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import type { SessionView } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { idleMs } from '../../http/session-store.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from './person.entity.ts'
import { SessionRecord } from './session.entity.ts'

/** What a session is called outside: derived from the hash of its id, so that neither the cookie nor the kept hash is shown. */
const shownId = (s: Pick<SessionRecord, 'idHash'>) => createHash('sha256').update(`shown ${s.idHash}`).digest('hex').slice(0, 24)

const openSessions = async (em: EntityManager, person: Person, now: Date) =>
  em.find(SessionRecord, { person, expiresAt: { $gt: now }, seenAt: { $gt: new Date(now.getTime() - idleMs) } }, { orderBy: { seenAt: 'desc', createdAt: 'desc' } })

/** @param current  the session that asks */
export async function listSessions(em: EntityManager, { person, current, now }: { person: Person; current: { idHash: string }; now: Date }): Promise<SessionView[]> {
  const sessions = await openSessions(em, person, now)
  return sessions.map((s) => ({ id: shownId(s), current: s.idHash === current.idHash, createdAt: s.createdAt.toISOString(), seenAt: s.seenAt.toISOString() }))
}

/** A person ends one of their own sessions. @throws DomainError not-found */
export async function endSession(em: EntityManager, { id, person, now }: { id: string; person: Person; now: Date }): Promise<void> {
  const session = (await openSessions(em, person, now)).find((s) => shownId(s) === id)
  if (!session) throw new DomainError('not-found', 'You have no such session; it may have ended. Nothing else was done.')
  em.remove(session)
  await appendEntry(em, { at: now, person, act: 'session ended', subject: { person: person.name }, details: { personId: person.id } })
}
