import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { MailChoices } from '../../../shared/contract/mail.ts'
import { DomainError } from '../../http/errors.ts'

/** A person who may sign in. People are disabled, never deleted: their acts stay theirs. */
export const Person = defineEntity({
  name: 'Person',
  properties: {
    id: p.integer().primary(),
    name: p.string().length(120),
    email: p.string().length(254).unique(),
    passwordHash: p.string().nullable().hidden().lazy(true, false),
    /** why the person's signatures are not accepted until another signer confirms them; null when they are */
    signingHold: p.string().nullable(),
    /** the administrator whose reset of the second factor holds them; never the one to confirm */
    signingHeldBy: p.integer().nullable(),
    /** the second factor's secret, sealed with a key outside the database; null when there is none */
    secondFactor: p.string().nullable().lazy(true, false),
    secondFactorAt: p.datetime().nullable(),
    /** the time step of the last code taken: neither it nor an earlier one is taken again */
    secondFactorStep: p.integer().nullable(),
    /** where it differs from what is usual for a topic */
    mailChoices: p.json<MailChoices>().nullable(),
    disabledAt: p.datetime().nullable(),
    createdAt: p.datetime(),
  },
})
export type Person = InferEntity<typeof Person>

/** For somebody who has still to set one. The type of a hidden property takes no null, although its column does. */
export const noPassword = null as never

export function disable(person: Person, now: Date) {
  if (person.disabledAt) throw new DomainError('wrong-state', `${person.name} is disabled already. Nothing was altered.`)
  person.disabledAt = now
}

export function enable(person: Person) {
  if (!person.disabledAt) throw new DomainError('wrong-state', `${person.name} is not disabled. Nothing was altered.`)
  person.disabledAt = null
}

/** From here on the person's signatures wait for another signer's confirmation. */
export function holdSigning(person: Person, why: string) {
  person.signingHold = why
}

export function releaseSigning(person: Person) {
  person.signingHold = null
  person.signingHeldBy = null
}

/** @param sealed  the secret, closed for this person */
export function putSecondFactor(person: Person, { sealed, step }: { sealed: string; step: number }, now: Date) {
  if (person.secondFactorAt) throw new DomainError('wrong-state', 'A second factor is set up already. Nothing was altered; remove it first, then set up another.')
  person.secondFactor = sealed
  person.secondFactorAt = now
  person.secondFactorStep = step
}

/** @throws DomainError wrong-state when there is none */
export function dropSecondFactor(person: Person) {
  if (!person.secondFactorAt) throw new DomainError('wrong-state', `${person.name} has no second factor. Nothing was altered.`)
  person.secondFactor = null
  person.secondFactorAt = null
  person.secondFactorStep = null
}
