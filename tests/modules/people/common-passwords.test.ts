import { dictionary } from '@zxcvbn-ts/language-common'
import { describe, expect, it } from 'vitest'
import { whyCommon } from '../../../server/modules/people/common-passwords.ts'
import { demoSignIns } from '../../../server/modules/people/demo-sign-ins.ts'
import { minPasswordLength } from '../../../shared/contract/people.ts'

const rafiq = { name: 'Rafiq Sandoval', email: 'rafiq.sandoval@dunlin.example' }

describe('a password that would be tried first', () => {
  const long = (dictionary as { passwords: string[] }).passwords.filter((p) => p.length >= minPasswordLength)
  it('is every one of the shipped list that is long enough, in any case and with marks between', () => {
    expect(long.length).toBeGreaterThan(30)
    for (const p of long) for (const written of [p, p.toUpperCase(), `${p.slice(0, 4)} ${p.slice(4)}!`]) expect(whyCommon(written, null), written).not.toBeNull()
  })

  it.each([
    ['passwordpassword', 'list'],
    ['Password-Baseball', 'two common'],
    ['football12345678', 'two common'],
    ['aaaaaaaaaaaaaaaa', 'over and over'],
    ['z9!z9!z9!z9!z9!z9!', 'over and over'],
    ['abcdefghijklmnop', 'row'],
    ['qwertyuiopasdfghjkl', 'row'],
    ['98765432101234567', 'row'],
    ['rafiqsandoval2026', 'little more'],
    ['Rafiq.Sandoval@dunlin.example', 'little more'],
    ['detent detent 2026!', 'little more'],
  ])('is "%s": %s', (password, why) => {
    expect([...password].length).toBeGreaterThanOrEqual(minPasswordLength)
    expect(whyCommon(password, rafiq)).toContain(why)
  })

  it.each(['a long enough password', 'mudflat knee torque', 'correct horse battery staple', 'rafiq counts nine herons', 'øyenstikker på brygga', '鶴の恩返しを読む夜は静かに更ける', 'kT9 vb2 Lq7 zz4 Pm1'])('is not "%s"', (password) => {
    expect(whyCommon(password, rafiq)).toBeNull()
  })

  it('is none of the demo, where a password is like one that somebody chose', () => {
    for (const d of demoSignIns) expect(whyCommon(d.password, d)).toBeNull()
  })
})
