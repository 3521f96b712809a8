import { Type, type Static } from '@sinclair/typebox'

const strict = { additionalProperties: false }

/**
 * Who needs a second factor: nobody; whoever holds a signing role; or they, and a code again at each signature that is signed more than
 * `codeMinutes` after the last one.
 */
export const secondFactorRules = ['optional', 'signers', 'signatures'] as const
export type SecondFactorRule = (typeof secondFactorRules)[number]

export const recoveryCodeCount = 10
/** Minutes in which a code that was entered lets its session sign. */
export const codeMinutes = 5

/** Six digits of an authenticator app, or a recovery code; spaces and hyphens as they were typed. */
const Code = Type.String({ minLength: 6, maxLength: 40, pattern: '^[0-9A-Za-z \\-]+$' })
const Password = Type.String({ minLength: 1, maxLength: 200 })

export const BeginSecondFactor = Type.Object({ password: Password }, strict)
export const EnterCode = Type.Object({ code: Code }, strict)
export const ReenterBoth = Type.Object({ password: Password, code: Code }, strict)
export type ReenterBoth = Static<typeof ReenterBoth>

/** What an authenticator app takes up; shown once. */
export interface SecondFactorBegun {
  /** base 32, to be typed */
  secret: string
  /** the same as a picture: SVG of a QR code */
  picture: string
}

/** null when the answer to a repeated request is given again: the codes were shown, and are kept nowhere. */
export interface RecoveryCodes {
  recoveryCodes: string[] | null
}

/** The answer to a sign-in: done, or the code of the second factor comes next. */
export interface SignInAnswer {
  signedIn: boolean
}

/** A person's own second factor. */
export interface OwnSecondFactor {
  /** null: none */
  since: string | null
  recoveryCodesLeft: number
  /** this person can't sign until they set one up */
  missing: boolean
  rule: SecondFactorRule
}
