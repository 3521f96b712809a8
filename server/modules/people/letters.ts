import type { Link } from './link.entity.ts'
import { linkHours } from './link.entity.ts'
import type { Person } from './person.entity.ts'

/** The mails of this module: subject and text. Each says who did what, and what to do if it was not meant. */
const letter = (person: Pick<Person, 'name'>, subject: string, ...lines: string[]) => ({ subject, text: [`${person.name},`, '', ...lines, '', 'Detent'].join('\n') })

const tell = 'If this was not agreed, tell an administrator at once.'
export const roleWords = (role: string, machine: string | null) => `${role} on ${machine ?? 'all machines'}`

export const linkLetter = (person: Person, link: Link, address: string, by: Person | null) =>
  link.kind === 'invitation'
    ? letter(person, 'Your invitation to Detent', `${by ? `${by.name} invites you` : 'You are invited'} to Detent, where the control parameters of our servo boards are kept. Set your password here:`, '', address, '', `The link works once, within ${linkHours.invitation} hours. Hand it to nobody.`)
    : letter(
        person,
        'Set a new Detent password',
        by ? `${by.name} asked for a new password of yours in Detent. Set it here:` : 'A new password was asked for at the sign-in page of Detent. Set it here:',
        '',
        address,
        '',
        `The link works once, within ${linkHours.reset} hours. Until it is used your password stays as it is.`,
        'If you sign changes or releases, another signer confirms you afterwards.',
        by ? tell : 'If you did not ask, do nothing.',
      )

export const passwordSetLetter = (person: Person, held: boolean) =>
  letter(person, 'Your Detent password was set', 'Your password was set by a link mailed to you; all your sessions have ended.', ...(held ? ['Your signatures wait until another signer confirms you.'] : []), tell)

export const passwordChangedLetter = (person: Person) => letter(person, 'Your Detent password was changed', 'Your password was changed by you; your other sessions have ended.', tell)

export const roleGrantedLetter = (person: Person, by: Person, words: string, confirmed: boolean) =>
  letter(person, 'A role in Detent', `${by.name} granted you the role ${words}.`, ...(confirmed ? [] : ['You can sign with it once another signer confirms it.']))

export const roleEndedLetter = (person: Person, by: Person, words: string) => letter(person, 'A role in Detent ended', `${by.name} ended your role ${words}; sign in again to go on with the others.`, tell)

export const signingConfirmedLetter = (person: Person, by: Person) => letter(person, 'Your signing right is confirmed', `${by.name} confirmed that you sign in Detent.`, tell)

export const disabledLetter = (person: Person, by: Person) => letter(person, 'You can no longer sign in to Detent', `${by.name} disabled your access. What you did stays under your name.`)

export const enabledLetter = (person: Person, by: Person) => letter(person, 'You can sign in to Detent again', `${by.name} enabled your access again, with the password you had.`)

export const secondFactorSetLetter = (person: Person) => letter(person, 'A second factor was set up in Detent', 'You set up a second factor: Detent asks for its code when you sign in. Your other sessions have ended.', tell)

export const secondFactorRemovedLetter = (person: Person) => letter(person, 'Your second factor was removed in Detent', 'You removed your second factor: your password alone signs you in now. Your other sessions have ended.', tell)

export const secondFactorResetLetter = (person: Person, by: Person | null, held: boolean) =>
  letter(
    person,
    'Your second factor was reset in Detent',
    `${by ? by.name : 'The operator of the server'} took your second factor away: your password alone signs you in now. All your sessions have ended. Set up another one on your account page.`,
    ...(held ? ['Your signatures wait until another signer confirms you.'] : []),
    tell,
  )

export const recoveryCodesMadeLetter = (person: Person) => letter(person, 'New recovery codes in Detent', 'You made new recovery codes; the ones before are no longer good.', tell)

export const recoveryCodeUsedLetter = (person: Person, left: number) => letter(person, 'A recovery code was used in Detent', `One of your recovery codes was used in the place of your second factor; ${left === 0 ? 'none is' : left === 1 ? 'one is' : `${left} are`} left. New ones are made on your account page.`, tell)
