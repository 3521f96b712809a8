import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'

const folder = mkdtempSync(join(tmpdir(), 'detent-cli-'))
const detent = (...args: string[]) => {
  const { status, stdout, stderr } = spawnSync(process.execPath, ['node_modules/tsx/dist/cli.mjs', 'server/cli.ts', ...args], { encoding: 'utf8', env: { ...process.env, DETENT_DATA: join(folder, 'data'), DETENT_MODE: 'workplace' } })
  return { status, stdout, stderr }
}

describe('the command line', () => {
  it('checks the examples: nothing blocks', () => {
    for (const file of ['knee', 'winch', 'dunlin']) {
      const { status, stdout, stderr } = detent('check', `examples/${file}.jsonc`)
      expect(stderr).toBe('')
      expect(status).toBe(0)
      expect(stdout).toMatch(/stable/)
      expect(stdout).toMatch(/ 0 block/)
    }
  })

  it('says what blocks, and exits with 1', () => {
    const text = readFileSync('examples/knee.jsonc', 'utf8').replace('"velocityGain": 3.2', '"velocityGain": 8').replace('"velocityWindow": 14', '"velocityWindow": 40')
    const file = join(folder, 'knee.jsonc')
    writeFileSync(file, text)
    const { status, stdout } = detent('check', file, '--schemas', 'examples/firmware', '--json')
    expect(status).toBe(1)
    expect(JSON.parse(stdout)).toMatchObject({ verdict: 'unstable' })
  })

  it('writes images: raw bytes and Intel HEX of the same joint agree', () => {
    const bin = join(folder, 'knee.bin')
    const hex = join(folder, 'knee.hex')
    expect(detent('image', 'examples/knee.jsonc', '--format', 'bin', '--out', bin)).toMatchObject({ status: 0 })
    expect(detent('image', 'examples/knee.jsonc', '--format', 'hex', '--out', hex)).toMatchObject({ status: 0 })
    const image = readFileSync(bin)
    expect(image.length).toBe(128)
    // Intel, Hexadecimal Object File Format Specification, Rev. A (1988): data records carry count, address, type 00, bytes
    for (const line of readFileSync(hex, 'utf8').trim().split('\n')) {
      const record = Buffer.from(line.trim().slice(1), 'hex')
      if (record[3] === 0) expect(record.subarray(4, 4 + record[0]).equals(image.subarray(record.readUInt16BE(1), record.readUInt16BE(1) + record[0]))).toBe(true)
      expect(record.reduce((sum, byte) => (sum + byte) & 0xff, 0)).toBe(0)
    }
  })

  it.each([
    [['image', 'examples/dunlin.jsonc', '--format', 'bin', '--out', join(folder, 'x.bin')], 'Say which joint'],
    [['image', 'examples/knee.jsonc', '--format', 'exe', '--out', join(folder, 'x.bin')], '--format takes'],
    [['check', 'examples/none.jsonc'], 'there is no such file'],
    [['fly'], 'There is no command "fly"'],
    [['check', 'examples/knee.jsonc', '--loud'], 'usage: check'],
  ])('refuses %j in words', (args, told) => {
    const { status, stderr } = detent(...args)
    expect(status).not.toBe(0)
    expect(stderr).toContain(told)
    expect(stderr).not.toContain('    at ')
  })

  it('founds a workplace once, and verifies its ledger', () => {
    const founded = detent('workplace', 'Ada Test', 'ada@dunlin.example')
    expect(founded.status).toBe(0)
    expect(founded.stdout).toMatch(/\/links\/[\w-]{40,}/)
    expect(detent('ledger', 'verify')).toMatchObject({ status: 0, stdout: expect.stringContaining('The chain holds: 1 entries') })
  })
})
