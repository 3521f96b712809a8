import type { EntityManager } from '@mikro-orm/core'
import { signingRoles, type Allowed } from '../../../shared/contract/people.ts'
import { Link } from './link.entity.ts'
import { isInvited } from './make-link.ts'
import type { SecondFactorRule } from '../../../shared/contract/second-factor.ts'
import type { HeldRole } from './permissions.ts'
import { isSigning, lacksSecondFactor } from './permissions.ts'
import type { Person } from './person.entity.ts'
import { RoleGrant } from './role-grant.entity.ts'

/** Whether anybody in the workplace can sign now. While nobody can, the first two signers confirm each other. */
export async function anySigner(em: EntityManager): Promise<boolean> {
  const one = await em.count(RoleGrant, {
    role: { $in: [...signingRoles] },
    endedAt: null,
    confirmedAt: { $ne: null },
    person: { disabledAt: null, signingHold: null, passwordHash: { $ne: null } },
  })
  return one > 0
}

/** What stands between a person and signing. */
export interface Waiting {
  person: Person
  /** no password yet, so that nobody has shown to be this person */
  invited: boolean
  /** signing roles held now */
  grants: RoleGrant[]
  /** the administrators who asked for the resets that the hold comes from */
  resetBy: number[]
  /** the workplace asks for a second factor, and none is set up */
  lacksSecondFactor: boolean
}

export const waits = ({ person, grants }: Waiting) => grants.length > 0 && (Boolean(person.signingHold) || grants.some((g) => !g.confirmedAt))

/** The administrator who asked for the last link that set this person's password; null when the person asked. */
export async function lastAskedBy(em: EntityManager, person: Person): Promise<number | null> {
  const [last] = await em.find(Link, { person, kind: 'reset', usedAt: { $ne: null } }, { orderBy: { usedAt: 'desc', id: 'desc' }, limit: 1 })
  return last?.askedBy?.id ?? null
}

/** @param grants  roles the person holds now */
export async function waitingOf(em: EntityManager, person: Person, grants: readonly RoleGrant[], rule: SecondFactorRule): Promise<Waiting> {
  const resets = person.signingHold ? [await lastAskedBy(em, person), person.signingHeldBy] : []
  return {
    person,
    invited: isInvited(person),
    grants: grants.filter((g) => isSigning(g.role)),
    resetBy: resets.filter((id) => typeof id === 'number'),
    lacksSecondFactor: lacksSecondFactor(rule, person, grants),
  }
}

/**
 * May this person confirm that the other one signs?
 *
 * Always a second person: not the holder, nor who granted the role or asked for the reset. They hold a confirmed signing
 * role themselves; an unconfirmed one does while the whole workplace has no confirmed signer.
 */
export function mayConfirm(by: { person: Person; held: readonly HeldRole[] }, waiting: Waiting, workplaceHasSigner: boolean): Allowed {
  const refuse = (why: string): Allowed => ({ allowed: false, why })
  const { person } = waiting
  if (by.person.id === person.id) return refuse('Nobody confirms their own signing right: another signer does.')
  const signing = by.held.filter((h) => isSigning(h.role))
  if (signing.length === 0) return refuse('This takes a signing role: peer reviewer or release manager.')
  if (signing.every((h) => h.lacksSecondFactor)) return refuse('Your own signing role waits until you set up a second factor, on your account page.')
  if (workplaceHasSigner && !signing.some((h) => h.confirmed)) return refuse('Your own signing role waits for confirmation.')
  if (!waits(waiting)) return refuse(`${person.name} has no signing right that waits for confirmation.`)
  if (person.disabledAt) return refuse(`${person.name} is disabled.`)
  if (waiting.invited) return refuse(`${person.name} has not set a password yet; confirm after that, so that you know who holds the right.`)
  if (waiting.lacksSecondFactor) return refuse(`${person.name} has not set up a second factor yet; confirm after that, so that you know who holds the right.`)
  if (waiting.grants.some((g) => !g.confirmedAt && g.grantedBy?.id === by.person.id)) return refuse('You granted this role: another signer confirms it.')
  if (waiting.resetBy.includes(by.person.id)) return refuse('You asked for the reset: another signer confirms it.')
  return { allowed: true }
}
