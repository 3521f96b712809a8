import { describe, expect, it } from 'vitest'
import { addressOf, newSecret, stepOf, typed } from '../../../server/modules/people/second-factor/totp.ts'

/**
 * RFC 6238, Appendix B, the rows of HMAC-SHA-1 (https://www.rfc-editor.org/rfc/rfc6238#appendix-B): key "12345678901234567890", T0 = 0,
 * X = 30 s, eight digits. Six digits are the last six of them: both are one integer, modulo 10^8 and 10^6 (RFC 4226 §5.3).
 */
const published: readonly (readonly [seconds: number, code: string, step: number])[] = [
  [59, '94287082', 0x1],
  [1111111109, '07081804', 0x23523ec],
  [1111111111, '14050471', 0x23523ed],
  [1234567890, '89005924', 0x273ef07],
  [2000000000, '69279037', 0x3f940aa],
  [20000000000, '65353130', 0x27bc86aa],
]
const key = new TextEncoder().encode('12345678901234567890')
const at = (seconds: number) => new Date(seconds * 1000)

describe('codes of the second factor', () => {
  it.each(published)('at %i s: the published code %s, of the published step', (seconds, code, step) => {
    expect(stepOf(key, code.slice(-6), at(seconds))).toBe(step)
  })

  it.each(published)('at %i s: no other code than %s', (seconds, code) => {
    const digits = code.slice(-6)
    for (let i = 0; i < 6; i += 1) {
      const other = digits.slice(0, i) + String((Number(digits[i]) + 1) % 10) + digits.slice(i + 1)
      expect(stepOf(key, other, at(seconds))).toBeNull()
    }
  })

  it('are of six digits and nothing else', () => {
    for (const code of ['', '94287082', '28708', '2870820', '28708x', '０８１８０４', '-28708']) expect(stepOf(key, code, at(59))).toBeNull()
  })

  it('count one step before and after', () => {
    const [, code, step] = published[5]
    for (const [shift, expected] of [[-2, null], [-1, step], [0, step], [1, step], [2, null]] as const) expect(stepOf(key, code.slice(-6), at(20000000000 + 30 * shift))).toBe(expected)
  })
})

describe('a new secret', () => {
  it('has 160 bits, and is another each time', () => {
    const made = Array.from({ length: 50 }, () => Buffer.from(newSecret()).toString('hex'))
    for (const hex of made) expect(hex).toHaveLength(40)
    expect(new Set(made).size).toBe(50)
  })

  it('is typed in base 32 (RFC 4648 §6), and goes into an address that apps read', () => {
    // RFC 4648 §10 gives base 32 of "foobar" as MZXW6YTBOI
    expect(typed(new TextEncoder().encode('foobar'))).toBe('MZXW 6YTB OI')
    const address = new URL(addressOf(key, 'rafiq@dunlin.example'))
    expect(address.protocol).toBe('otpauth:')
    expect(decodeURIComponent(address.pathname)).toContain('Detent:rafiq@dunlin.example')
    expect(Object.fromEntries(address.searchParams)).toEqual({ issuer: 'Detent', secret: 'GEZDGNBVGY3TQOJQGEZDGNBVGY3TQOJQ', algorithm: 'SHA1', digits: '6', period: '30' })
  })
})
