import type { EntityManager } from '@mikro-orm/core'
import type { RoleGrantRequest } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Machine } from '../machines/machine.entity.ts'
import { queueMail } from '../mail/queue-mail.ts'
import { freshPerson } from './find-person.ts'
import { roleGrantedLetter, roleWords } from './letters.ts'
import { isSigning } from './permissions.ts'
import type { Person } from './person.entity.ts'
import { RoleGrant } from './role-grant.entity.ts'

/**
 * Adds a grant; a signing role begins unconfirmed.
 *
 * @param pointer  where in the request's body the role stands
 * @throws DomainError invalid-request when there is no such machine; already-exists when the role is held there
 */
export async function addGrant(em: EntityManager, { to, asked, by, now, pointer }: { to: Person; asked: RoleGrantRequest; by: Person | null; now: Date; pointer: string }): Promise<RoleGrant> {
  const machine = asked.machine === null ? null : await em.findOne(Machine, { key: asked.machine, retiredAt: null })
  if (asked.machine !== null && machine === null)
    throw new DomainError('invalid-request', `There is no machine "${asked.machine}" to grant a role on, or it is retired. Nothing was granted.`, { fields: [{ pointer: `${pointer}/machine`, detail: 'is no machine that roles can be granted on' }] })
  await em.flush()
  if ((await em.count(RoleGrant, { person: to, role: asked.role, machine, endedAt: null })) > 0)
    throw new DomainError('already-exists', `${to.name} is ${roleWords(asked.role, asked.machine)} already. Nothing was granted.`, { fields: [{ pointer: `${pointer}/role`, detail: 'is held already' }] })
  return em.create(RoleGrant, { person: to, machine, role: asked.role, grantedBy: by, grantedAt: now, confirmedAt: null, endedAt: null })
}

/**
 * Grants a role. A signing role gives no signing right until a second signer confirms it.
 *
 * @throws DomainError wrong-state when the person is disabled; as addGrant
 */
export async function grantRole(em: EntityManager, { to, asked, person: by, now }: { to: Person; asked: RoleGrantRequest; person: Person; now: Date }): Promise<void> {
  const holder = await freshPerson(em, to)
  if (holder.disabledAt) throw new DomainError('wrong-state', `${holder.name} is disabled. Nothing was granted; enable them first.`)
  const grant = await addGrant(em, { to: holder, asked, by, now, pointer: '' })
  queueMail(em, { person: holder, ...roleGrantedLetter(holder, by, roleWords(asked.role, asked.machine), !isSigning(asked.role)), now })
  await em.flush()
  const subject = { person: holder.name, ...(asked.machine === null ? {} : { machine: asked.machine }) }
  await appendEntry(em, { at: now, person: by, act: 'role granted', subject, details: { personId: holder.id, grant: grant.id, role: asked.role, machine: asked.machine } })
}
