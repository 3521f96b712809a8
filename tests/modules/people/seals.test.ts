import { randomBytes } from 'node:crypto'
import { describe, expect, it } from 'vitest'
import { sealsOf } from '../../../server/modules/people/second-factor/seals.ts'

const secret = Buffer.from('12345678901234567890')
const own = 'second factor of person 7'

describe('a sealed secret', () => {
  const key = randomBytes(48)
  const sealed = sealsOf(key).seal(secret, own)

  it('opens with its key for its owner, and shows nothing of what is in it', () => {
    expect(Buffer.from(sealsOf(key).open(sealed, own)!).equals(secret)).toBe(true)
    expect(Buffer.from(sealed.slice(2), 'base64url').includes(secret)).toBe(false)
  })

  it('is another each time, its nonce never the same', () => {
    const nonces = Array.from({ length: 200 }, () => sealsOf(key).seal(secret, own).slice(2, 18))
    expect(new Set(nonces).size).toBe(200)
  })

  it('opens for nobody else, and with no other key', () => {
    expect(sealsOf(key).open(sealed, 'second factor of person 8')).toBeNull()
    expect(sealsOf(key).open(sealed, `new ${own}`)).toBeNull()
    expect(sealsOf(randomBytes(48)).open(sealed, own)).toBeNull()
  })

  it('opens no more once a bit of it is another, wherever', () => {
    const bytes = Buffer.from(sealed.slice(2), 'base64url')
    for (let bit = 0; bit < bytes.length * 8; bit += 1) {
      const other = Buffer.from(bytes)
      other[bit >> 3] ^= 1 << (bit & 7)
      expect(sealsOf(key).open(`1.${other.toString('base64url')}`, own)).toBeNull()
    }
    for (const text of ['', '1.', '2' + sealed.slice(1), sealed.slice(0, 30), 'not sealed at all']) expect(sealsOf(key).open(text, own)).toBeNull()
  })
})
