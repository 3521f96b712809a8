import type { EntityManager } from '@mikro-orm/core'
import type { Allowed, GrantView, Me, PersonView } from '../../../shared/contract/people.ts'
import type { SecondFactorRule } from '../../../shared/contract/second-factor.ts'
import { administrators } from './last-administrator.ts'
import { isInvited } from './make-link.ts'
import { acts, isSigning, lacksSecondFactor, may, type HeldRole } from './permissions.ts'
import { Person } from './person.entity.ts'
import { RoleGrant } from './role-grant.entity.ts'
import { codesLeft } from './second-factor/recovery-codes.ts'
import { anySigner, mayConfirm, waitingOf } from './signing-right.ts'

/** Who reads, and what they hold. */
export interface Reader {
  person: Person
  held: readonly HeldRole[]
  /** the workplace's; left out where no `may` of the answer is used */
  rule?: SecondFactorRule
}

const presentGrant = (person: Person, g: RoleGrant): GrantView => ({
  id: g.id,
  role: g.role,
  machine: g.machine?.key ?? null,
  confirmed: !isSigning(g.role) || (Boolean(g.confirmedAt) && !person.signingHold),
})

/** What the person may do, by machine: the client hides by it, the server decides again at each act. */
export async function presentMe(em: EntityManager, { person, held, rule = 'optional' }: Reader, token: string): Promise<Me> {
  const grants = await em.find(RoleGrant, { person, endedAt: null }, { populate: ['machine'], orderBy: { id: 'asc' } })
  const machines = [null, ...new Set(held.flatMap((h) => (h.machine === null ? [] : [h.machine])))]
  return {
    id: person.id,
    name: person.name,
    email: person.email,
    roles: grants.map((g) => presentGrant(person, g)),
    signingHold: person.signingHold ?? null,
    secondFactor: {
      since: person.secondFactorAt?.toISOString() ?? null,
      recoveryCodesLeft: person.secondFactorAt ? await codesLeft(em, person) : 0,
      missing: lacksSecondFactor(rule, person, held),
      rule,
    },
    acts: Object.fromEntries(machines.map((m) => [m ?? '*', acts.filter((a) => may(held, a, m).allowed)])),
    token,
  }
}

/** Who keeps people or signs sees everybody; others see those who hold roles where they may read. */
const sees = (reader: Reader, person: Person, grants: readonly RoleGrant[]) =>
  reader.person.id === person.id ||
  may(reader.held, 'keep people', null).allowed ||
  reader.held.some((h) => isSigning(h.role)) ||
  grants.some((g) => !g.machine || may(reader.held, 'read', g.machine.key).allowed)

const first = (...refusals: (string | false)[]): Allowed => {
  const why = refusals.find((r) => r !== false)
  return why === undefined ? { allowed: true } : { allowed: false, why }
}

/** The people given, in order, as the reader may see them; those out of sight are left out. */
export async function presentPeople(em: EntityManager, people: readonly Person[], reader: Reader): Promise<PersonView[]> {
  const grants = await em.find(RoleGrant, { person: { $in: people.map((p) => p.id) }, endedAt: null }, { populate: ['machine'], orderBy: { id: 'asc' } })
  const keeps = may(reader.held, 'keep people', null)
  const refused = keeps.allowed ? false : keeps.why
  const hasSigner = await anySigner(em)
  const keepers = await administrators(em)
  const views: PersonView[] = []
  for (const person of people) {
    const theirs = grants.filter((g) => g.person.id === person.id)
    if (!sees(reader, person, theirs)) continue
    const disabled = Boolean(person.disabledAt)
    const isDisabled = disabled && `${person.name} is disabled.`
    const onlyKeeper = keepers.has(person.id) && keepers.size === 1 && `${person.name} is the last administrator on all machines.`
    views.push({
      id: person.id,
      name: person.name,
      email: keeps.allowed || reader.person.id === person.id ? person.email : null,
      state: disabled ? 'disabled' : isInvited(person) ? 'invited' : 'active',
      signingHold: person.signingHold ?? null,
      secondFactor: keeps.allowed || reader.person.id === person.id || reader.held.some((h) => isSigning(h.role)) ? Boolean(person.secondFactorAt) : null,
      roles: theirs.map((g) => presentGrant(person, g)),
      may: {
        grantRoles: first(refused, isDisabled),
        endRoles: first(refused),
        disable: first(refused, isDisabled, onlyKeeper),
        enable: first(refused, !disabled && `${person.name} is not disabled.`),
        reset: first(refused, isDisabled),
        resetSecondFactor: first(refused, !person.secondFactorAt && `${person.name} has no second factor.`, person.id === reader.person.id && 'Remove your own on your account page.'),
        confirmSigning: mayConfirm(reader, await waitingOf(em, person, theirs, reader.rule ?? 'optional'), hasSigner),
      },
    })
  }
  return views
}

/** Everybody, by name. */
export const everybody = (em: EntityManager) => em.find(Person, {}, { populate: ['passwordHash'], orderBy: { name: 'asc', id: 'asc' } })
