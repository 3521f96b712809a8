import { randomBytes } from 'node:crypto'
import { chmodSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, describe, expect, it } from 'vitest'
import { secretFile } from '../../server/db/secret-file.ts'

const folder = mkdtempSync(join(tmpdir(), 'detent-secret-'))
afterAll(() => rmSync(folder, { recursive: true }))
const read = (name: string) => secretFile(join(folder, name), 'a secret of the tests')
const put = (name: string, text: string, mode = 0o600) => {
  writeFileSync(join(folder, name), text)
  chmodSync(join(folder, name), mode)
}

describe('a secret beside the database', () => {
  it('is made once, for its owner alone, and read again', () => {
    const first = read('made')
    expect(first.made).toBe(true)
    expect(first.secret).toHaveLength(48)
    expect(statSync(join(folder, 'made')).mode & 0o777).toBe(0o600)
    expect(read('made')).toEqual({ secret: first.secret, made: false })
    expect(read('another').secret.equals(first.secret)).toBe(false)
  })

  it.each([0o640, 0o604, 0o660, 0o644])('is refused when others may read it: mode %o', (mode) => {
    put('open', randomBytes(48).toString('base64url'), mode)
    expect(() => read('open')).toThrow(/may be read by others.*chmod 600/)
  })

  it.each([['empty', ''], ['short', 'hunter2'], ['31 bytes', randomBytes(31).toString('base64url')], ['one byte over and over', 'A'.repeat(64)], ['a word over and over', 'changeme'.repeat(12)]])('is refused when it is weak: %s', (_what, text) => {
    put('weak', text)
    expect(() => read('weak')).toThrow('too weak for a secret of the tests')
    expect(readFileSync(join(folder, 'weak'), 'utf8')).toBe(text)
  })

  it('is taken from an operator who made it elsewhere, with or without a line end', () => {
    const own = randomBytes(32)
    put('own', `${own.toString('base64url')}\n`)
    expect(read('own')).toEqual({ secret: own, made: false })
  })
})
