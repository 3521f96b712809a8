import type { EntityManager } from '@mikro-orm/core'
import type { SecondFactorRule } from '../../../shared/contract/second-factor.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { freshPerson } from './find-person.ts'
import { heldRoles } from './held-roles.ts'
import { roleWords, signingConfirmedLetter } from './letters.ts'
import { isSigning, underRule } from './permissions.ts'
import type { Person } from './person.entity.ts'
import { releaseSigning } from './person.entity.ts'
import { confirm, RoleGrant } from './role-grant.entity.ts'
import { anySigner, mayConfirm, waitingOf, waits } from './signing-right.ts'

/**
 * A second signer confirms that a person signs: their unconfirmed signing roles, and whatever holds their signatures.
 *
 * @throws DomainError own-work, not-permitted (both recorded); wrong-state when nothing waits
 */
export async function confirmSigning(em: EntityManager, { of, person: by, rule, now }: { of: Person; person: Person; rule: SecondFactorRule; now: Date }): Promise<void> {
  const signer = await freshPerson(em, of)
  const grants = await em.find(RoleGrant, { person: signer, endedAt: null }, { populate: ['machine'], refresh: true })
  const waiting = await waitingOf(em, signer, grants, rule)
  const hasSigner = await anySigner(em)
  const held = underRule(rule, by, await heldRoles(em, by))
  const answer = mayConfirm({ person: by, held }, waiting, hasSigner)
  if (!answer.allowed) {
    if (by.id === signer.id) throw new DomainError('own-work', `${answer.why} Nothing was confirmed.`, { recorded: true })
    const signing = held.filter((h) => isSigning(h.role))
    if (signing.length > 0 && signing.every((h) => h.lacksSecondFactor)) throw new DomainError('second-factor-missing', `${answer.why} Nothing was confirmed.`, { recorded: true })
    const stateOnly = !waits(waiting) || waiting.invited || waiting.lacksSecondFactor || Boolean(signer.disabledAt)
    throw new DomainError(stateOnly ? 'wrong-state' : 'not-permitted', `${answer.why} Nothing was confirmed.`, { recorded: !stateOnly })
  }
  const roles = waiting.grants.filter((g) => !g.confirmedAt).map((g) => roleWords(g.role, g.machine?.key ?? null))
  const hold = signer.signingHold ?? null
  for (const grant of waiting.grants) confirm(grant, by, now)
  releaseSigning(signer)
  queueMail(em, { person: signer, ...signingConfirmedLetter(signer, by), now })
  await appendEntry(em, { at: now, person: by, act: 'signing right confirmed', subject: { person: signer.name }, details: { personId: signer.id, roles, hold, firstSigner: !hasSigner } })
}
