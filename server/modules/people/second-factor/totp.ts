import { Secret, TOTP } from 'otpauth'

/** What every authenticator app computes: HMAC-SHA-1, six digits, steps of 30 s (RFC 6238; others are read by few apps). */
const form = { algorithm: 'SHA1', digits: 6, period: 30 } as const

/** A secret of 160 bits, the length that RFC 4226 §4 recommends. */
export const newSecret = (): Uint8Array => new Secret({ size: 20 }).bytes

/** As it is typed into an app that reads no picture: base 32, in fours. */
export const typed = (secret: Uint8Array): string => secretOf(secret).base32.replaceAll(/.{4}(?=.)/g, '$& ')

/** As a picture carries it to an app. */
export const addressOf = (secret: Uint8Array, email: string): string => new TOTP({ ...form, issuer: 'Detent', label: email, secret: secretOf(secret) }).toString()

const secretOf = (secret: Uint8Array) => new Secret({ buffer: new Uint8Array(secret).buffer })

/**
 * The time step that a code belongs to; null when it is wrong. The step before and the one after count, for clocks that differ and
 * people who type slowly.
 *
 * @source RFC 6238 §5.2
 */
export function stepOf(secret: Uint8Array, code: string, now: Date): number | null {
  if (!/^[0-9]{6}$/.test(code)) return null
  const timestamp = now.getTime()
  const delta = TOTP.validate({ ...form, secret: secretOf(secret), token: code, timestamp, window: 1 })
  return delta === null ? null : TOTP.counter({ period: form.period, timestamp }) + delta
}
