import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../../http/errors.ts'
import { appendEntry } from '../../ledger/append-entry.ts'
import { queueMail } from '../../mail/queue-mail.ts'
import { endSessions } from '../end-sessions.ts'
import { freshPerson } from '../find-person.ts'
import { secondFactorResetLetter } from '../letters.ts'
import { isSigning } from '../permissions.ts'
import { dropSecondFactor, holdSigning, type Person } from '../person.entity.ts'
import { RoleGrant } from '../role-grant.entity.ts'
import { endRecoveryCodes } from './recovery-codes.ts'

/**
 * Takes away the second factor of somebody who lost it: by an administrator, or by the operator of the machine. Their sessions end, they are
 * told by mail, and who holds a signing role signs again only after another signer confirmed them.
 *
 * @param by  null: the operator, on the command line
 * @throws DomainError not-permitted for one's own (recorded); wrong-state when there is none
 */
export async function resetSecondFactor(em: EntityManager, { whom, person: by, now }: { whom: Person; person: Person | null; now: Date }): Promise<void> {
  if (by?.id === whom.id) throw new DomainError('not-permitted', 'Nobody resets their own second factor: remove it on your account page with a code, or ask another administrator. Nothing was altered.', { recorded: true })
  const person = await freshPerson(em, whom)
  dropSecondFactor(person)
  await endRecoveryCodes(em, person)
  const signs = (await em.find(RoleGrant, { person, endedAt: null })).some((g) => isSigning(g.role))
  if (signs) {
    holdSigning(person, 'second factor reset')
    person.signingHeldBy = by?.id ?? null
  }
  const sessions = await endSessions(em, person)
  queueMail(em, { person, ...secondFactorResetLetter(person, by, signs), now })
  await appendEntry(em, { at: now, person: by, act: 'second factor reset', subject: { person: person.name }, details: { personId: person.id, signingHold: person.signingHold ?? null, sessionsEnded: sessions } })
}
