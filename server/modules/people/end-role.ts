import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { endSessions } from './end-sessions.ts'
import { readId } from './find-person.ts'
import { mustLeaveAnAdministrator } from './last-administrator.ts'
import { roleEndedLetter, roleWords } from './letters.ts'
import type { Person } from './person.entity.ts'
import { end, RoleGrant } from './role-grant.entity.ts'

/**
 * Ends a role, and every session of who held it, at once. The grant stays on record.
 *
 * @throws DomainError not-found; wrong-state when it ended already; last-administrator
 */
export async function endRole(em: EntityManager, { of, grantId, person: by, now }: { of: Person; grantId: string; person: Person; now: Date }): Promise<void> {
  const id = readId(grantId)
  const grant = id === null ? null : await em.findOne(RoleGrant, { id, person: of }, { populate: ['machine', 'person'], refresh: true })
  if (!grant) throw new DomainError('not-found', `${of.name} holds no such role. Nothing was ended; reload to see which they hold.`)
  if (!grant.endedAt && grant.role === 'administrator' && !grant.machine) await mustLeaveAnAdministrator(em, grant.person)
  end(grant, now)
  const machine = grant.machine?.key ?? null
  const sessions = await endSessions(em, of)
  queueMail(em, { person: grant.person, ...roleEndedLetter(grant.person, by, roleWords(grant.role, machine)), now })
  await appendEntry(em, { at: now, person: by, act: 'role ended', subject: { person: of.name, ...(machine === null ? {} : { machine }) }, details: { personId: of.id, grant: grant.id, role: grant.role, machine, sessionsEnded: sessions } })
}
