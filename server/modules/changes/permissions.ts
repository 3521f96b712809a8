import type { ChangeState, ChangeView } from '../../../shared/contract/changes.ts'
import type { Allowed } from '../../../shared/contract/people.ts'
import { may, type Act, type HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import type { Signature } from '../reviews/signature.entity.ts'
import type { Change } from './change.entity.ts'

const yes: Allowed = { allowed: true }
const no = (why: string): Allowed => ({ allowed: false, why })
/** The first refusal, or allowed. */
const all = (...answers: (Allowed | (() => Allowed))[]): Allowed => {
  for (const answer of answers) {
    const now = typeof answer === 'function' ? answer() : answer
    if (!now.allowed) return now
  }
  return yes
}

export const inState = (change: Change, ...states: ChangeState[]): Allowed => (states.includes(change.state) ? yes : no(`The change is ${change.state}.`))

/** Nobody acts on both sides of the two-person rule. */
export const notOwn = (change: Change, person: Person): Allowed => (change.writers.includes(person.id) ? no('You wrote in this change; two other people sign it.') : yes)

export const writes = (change: Change, person: Person): Allowed => (change.writers.includes(person.id) ? yes : no(`Only its author and the people invited write in it; ${change.author.name} is the author.`))

/** What a person may do with a change now; the acts ask the same and more (password, hash, firmware authorship). */
export function abilitiesOn(change: Change, person: Person, held: readonly HeldRole[], facts: { signatures: readonly Signature[]; onNewest: boolean }): ChangeView['may'] {
  const role = (act: Act) => may(held, act, change.machine.key)
  const notSigned = facts.signatures.some((s) => s.person.id === person.id) ? no('You signed this change already; another person signs next.') : yes
  const newest = facts.onNewest ? yes : no('Another release came meanwhile; the change has to be brought up to date first.')
  return {
    edit: all(inState(change, 'draft'), role('draft changes'), writes(change, person)),
    submit: all(inState(change, 'draft'), role('draft changes'), writes(change, person), newest),
    cancel: all(inState(change, 'draft', 'submitted', 'approved'), role('draft changes'), change.author.id === person.id ? yes : no('Only its author cancels a change.')),
    return: all(inState(change, 'submitted', 'approved'), role('return changes'), notOwn(change, person)),
    signPeerReview: all(inState(change, 'submitted'), role('sign peer review'), notOwn(change, person), notSigned, newest),
    release: all(inState(change, 'approved'), role('sign release'), notOwn(change, person), notSigned, newest),
    bringUpToDate: all(inState(change, 'draft', 'submitted', 'approved'), role('draft changes'), writes(change, person), facts.onNewest ? no('It is on the newest release already.') : yes),
    inviteWriter: all(inState(change, 'draft'), role('draft changes'), writes(change, person)),
    takeBenchImage: all(inState(change, 'draft', 'submitted', 'approved'), role('draft changes'), writes(change, person)),
  }
}
