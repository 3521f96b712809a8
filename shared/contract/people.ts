import { Type, type Static } from '@sinclair/typebox'
import { Key } from '../parameters/machine-set.ts'
import type { OwnSecondFactor, SecondFactorRule } from './second-factor.ts'

const strict = { additionalProperties: false }

export const roles = ['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder', 'administrator'] as const
export type Role = (typeof roles)[number]

/** Roles whose holder signs: a fresh grant gives no signing right until another signer confirms it. */
export const signingRoles: readonly Role[] = ['peer reviewer', 'release manager']

const RoleName = Type.Union(roles.map((r) => Type.Literal(r)))
const Name = Type.String({ minLength: 1, maxLength: 120, pattern: '\\S' })
const Email = Type.String({ format: 'email', maxLength: 254 })
export const minPasswordLength = 15
const Password = Type.String({ minLength: 1, maxLength: 200 })

export const SignIn = Type.Object({ email: Type.String({ minLength: 1, maxLength: 254, pattern: '^[^\\u0000]*$' }), password: Password }, strict)
export type SignIn = Static<typeof SignIn>

export const RoleGrantRequest = Type.Object({ role: RoleName, machine: Type.Union([Key, Type.Null()], { description: 'null: on all machines' }) }, strict)
export type RoleGrantRequest = Static<typeof RoleGrantRequest>

export const InvitePerson = Type.Object({ name: Name, email: Email, roles: Type.Array(RoleGrantRequest, { maxItems: 50 }) }, strict)
export type InvitePerson = Static<typeof InvitePerson>

export const AskReset = Type.Object({ email: Email }, strict)
export const UseLink = Type.Object({ secret: Type.String({ minLength: 20, maxLength: 200 }), password: Password }, strict)
export type UseLink = Static<typeof UseLink>
/** The acts that say everything in their address. */
export const Nothing = Type.Object({}, strict)
export const ChangePassword = Type.Object({ current: Password, next: Password }, strict)
export type ChangePassword = Static<typeof ChangePassword>

export interface GrantView {
  id: number
  role: Role
  machine: string | null
  /** false: a signing role that a second signer has still to confirm */
  confirmed: boolean
}

/** An answer to "may I": allowed, or the reason why not, in words for the person. */
export type Allowed = { allowed: true } | { allowed: false; why: string }

export interface PersonView {
  id: number
  name: string
  /** null to whom neither keeps people nor is this person */
  email: string | null
  state: 'invited' | 'active' | 'disabled'
  /** why signatures of this person wait for another signer's confirmation; null when they don't */
  signingHold: string | null
  /** whether one is set up; null to whom it does not concern */
  secondFactor: boolean | null
  roles: GrantView[]
  may: { grantRoles: Allowed; endRoles: Allowed; disable: Allowed; enable: Allowed; reset: Allowed; resetSecondFactor: Allowed; confirmSigning: Allowed }
}

export interface PeopleView {
  people: PersonView[]
  may: { invite: Allowed }
}

/** Who is signed in: what the client shows and hides by. */
export interface Me {
  id: number
  name: string
  email: string
  roles: GrantView[]
  /** why this person's signatures wait for another signer's confirmation; null when they don't */
  signingHold: string | null
  secondFactor: OwnSecondFactor
  /** acts of the permission matrix, by machine key; '*' holds what is not tied to one machine */
  acts: Record<string, string[]>
  /** to be sent as X-Detent-Token with every act */
  token: string
}

/** Whom a single-use link is for, before it is used. */
export interface LinkView {
  kind: 'invitation' | 'reset'
  name: string
  email: string
  expiresAt: string
}

/** A password was set by link: what comes next. */
export interface LinkUsed {
  email: string
  /** signing waits until another signer confirms it */
  signingHold: string | null
}

export interface SessionView {
  /** derived from the session, opens nothing */
  id: string
  current: boolean
  createdAt: string
  seenAt: string
}

/** What the sign-in page needs to know. */
export interface WorkplaceView {
  mode: 'demo' | 'workplace'
  secondFactor: SecondFactorRule
  /** demo mode only: the invented people and their passwords */
  signIns: { name: string; email: string; password: string; roles: string }[]
}
