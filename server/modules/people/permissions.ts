import { signingRoles, type Allowed, type Role } from '../../../shared/contract/people.ts'
import type { SecondFactorRule } from '../../../shared/contract/second-factor.ts'
import type { Person } from './person.entity.ts'

/** The permission matrix: each act and the roles that hold it. The one place where rights are given. */
export const matrix = {
  read: ['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder', 'administrator'],
  'draft changes': ['controls engineer'],
  'draft firmware': ['controls engineer'],
  'upload evidence': ['controls engineer'],
  comment: ['controls engineer', 'peer reviewer', 'release manager', 'builder'],
  'return changes': ['peer reviewer', 'release manager'],
  'sign peer review': ['peer reviewer'],
  'sign release': ['release manager'],
  withdraw: ['release manager'],
  'publish firmware': ['release manager'],
  'sign policy': ['release manager'],
  download: ['controls engineer', 'release manager', 'builder'],
  'record flashes': ['controls engineer', 'release manager', 'builder'],
  'make machines': ['administrator'],
  'propose policy': ['administrator'],
  'keep people': ['administrator'],
  'keep mail': ['administrator'],
  'keep keys': ['administrator'],
  'keep backups': ['administrator'],
} as const satisfies Record<string, readonly Role[]>

export type Act = keyof typeof matrix
export const acts = Object.keys(matrix) as Act[]

/** A role as held now: on one machine by its key, or on all of them. */
export interface HeldRole {
  role: Role
  machine: string | null
  confirmed: boolean
  /** a signing role whose holder has still to set up a second factor */
  lacksSecondFactor?: true
}

export const isSigning = (role: Role) => signingRoles.includes(role)

/** Whether a person who holds these roles has still to set up a second factor before they sign. */
export const lacksSecondFactor = (rule: SecondFactorRule, person: Pick<Person, 'secondFactorAt'>, held: readonly { role: Role }[]): boolean =>
  rule !== 'optional' && !person.secondFactorAt && held.some((h) => isSigning(h.role))

/** The roles as they count under the workplace's rule: a signing role without the second factor that it takes signs nothing. */
export const underRule = (rule: SecondFactorRule, person: Pick<Person, 'secondFactorAt'>, held: readonly HeldRole[]): HeldRole[] =>
  held.map((h) => (lacksSecondFactor(rule, person, [h]) ? { ...h, confirmed: false, lacksSecondFactor: true } : h))

const list = (words: readonly string[]) => (words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} or ${words.at(-1)}`)

/** Acts by which a person puts their name to something. */
export const signingActs: readonly Act[] = ['sign peer review', 'sign release', 'publish firmware', 'sign policy']

/**
 * May somebody who holds these roles do the act on the machine?
 *
 * A role held on all machines counts on each. `machine` null asks for an act that is not tied to one machine
 * (people, mail, firmware lines): a role on any machine answers for reading and firmware, only a role on all machines for keeping.
 */
export function may(held: readonly HeldRole[], act: Act, machine: string | null): Allowed {
  const holders: readonly Role[] = matrix[act]
  const wide = act === 'read' || act === 'draft firmware' || act === 'publish firmware'
  const reaches = (h: HeldRole) => h.machine === null || (machine === null ? wide : h.machine === machine)
  const fitting = held.filter((h) => holders.includes(h.role) && reaches(h))
  if (fitting.length === 0) return { allowed: false, why: `This takes the role ${list(holders)}${machine ? ` on ${machine}` : ''}.` }
  if (signingActs.includes(act) && !fitting.some((h) => h.confirmed)) {
    if (fitting.every((h) => h.lacksSecondFactor)) return { allowed: false, why: 'Your signing role waits until you set up a second factor, on your account page.' }
    return { allowed: false, why: 'Your signing role waits until a second person who holds a signing role confirms it.' }
  }
  return { allowed: true }
}
