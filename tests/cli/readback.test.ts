import { spawnSync } from 'node:child_process'
import { generateKeyPairSync } from 'node:crypto'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { unzipSync, zipSync } from 'fflate'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { image as runImage } from '../../server/cli/image.ts'
import { kit as runKit } from '../../server/cli/kit.ts'
import { readback as runReadback } from '../../server/cli/readback.ts'
import { Usage } from '../../server/cli/usage.ts'
import { firmwarePath, jointFiles, packKit, signKit } from '../../server/exports/kit.ts'
import { publicKeyPem } from '../../server/exports/sign-manifest.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import { firmware } from '../registers/a-schema.ts'

const folder = mkdtempSync(join(tmpdir(), 'detent-readback-'))
afterAll(() => rmSync(folder, { recursive: true, force: true }))
const file = (name: string) => join(folder, name)
/** A command in this process, with what it writes; a refusal as its message and usage. */
async function command(run: (args: string[]) => Promise<number>, args: readonly string[]) {
  let stdout = ''
  const write = vi.spyOn(process.stdout, 'write').mockImplementation((text) => {
    stdout += String(text)
    return true
  })
  try {
    return { status: await run([...args]), stdout, stderr: '' }
  } catch (error) {
    return { status: error instanceof Usage ? 2 : 1, stdout, stderr: (error as Error).message }
  } finally {
    write.mockRestore()
  }
}
const detent = (name: 'readback' | 'kit' | 'image', ...args: string[]) => command({ readback: runReadback, kit: runKit, image: runImage }[name], args)
const schema = 'examples/firmware/hinge-2.1.0.schema.json'
const set = 'examples/knee.jsonc'
const readback = (dump: string, ...more: string[]) => detent('readback', dump, '--schema', schema, ...more)

/** The knee's image with some bytes put in place of others. */
function altered(name: string, bytes: Record<number, number>): string {
  const image = readFileSync(file('knee.bin'))
  for (const [address, byte] of Object.entries(bytes)) image[Number(address)] = byte
  writeFileSync(file(name), image)
  return file(name)
}

beforeAll(async () => {
  for (const format of ['bin', 'hex', 'srec', 'json']) expect(await detent('image', set, '--format', format, '--out', file(`knee.${format}`), '--release', '7')).toMatchObject({ status: 0, stderr: '' })
})

describe('readback', () => {
  it.each(['knee.bin', 'knee.hex', 'knee.srec'])('finds %s equal to the set, to its record and to the other forms of the image', async (name) => {
    for (const against of [set, file('knee.json'), file('knee.bin'), file('knee.hex')]) {
      const { status, stdout, stderr } = await readback(file(name), '--against', against)
      expect({ status, stderr }).toEqual({ status: 0, stderr: '' })
      expect(stdout).toBe(`release number 7\nequal to ${against}\n`)
    }
  })

  it('names every register that differs, in units and bytes, and exits with 1', async () => {
    // hinge 2.1.0: velocity gain q7.24 at 0x24, low byte first; 5.0 is 05000000
    const { status, stdout } = await readback(altered('gain.bin', { 0x24: 0, 0x25: 0, 0x26: 0, 0x27: 5 }), '--against', set)
    expect(status).toBe(1)
    expect(stdout).toContain('differs: 0x24 velocityGain (Velocity gain): 5 A·s/rad, expected 3.199999988079071 A·s/rad; bytes 00 00 00 05, expected 33 33 33 03')
    expect(stdout).toMatch(/finding: The checksum is 0x[0-9A-F]{4}, but the bytes give 0x[0-9A-F]{4}/)
    expect(stdout).toContain(`1 register differs from ${set}`)
  })

  it('lists bytes that no register explains', async () => {
    const { status, stdout } = await readback(altered('strange.bin', { 0x5d: 0x12 }), '--against', set)
    expect(status).toBe(1)
    expect(stdout).toContain('unexplained: 0x5D, 1 bytes: 12')
  })

  it('decodes a dump alone, with its units, and tells what makes no sense', async () => {
    const good = await readback(file('knee.hex'))
    expect(good.status).toBe(0)
    expect(good.stdout).toContain('0x38 currentLimit: 2.6 A\n')
    expect(good.stdout).toMatch(/release number 7\ndecoded, 0 findings\n$/)
    const bad = await readback(altered('mode.bin', { 0x06: 0x11 }))
    expect(bad.status).toBe(1)
    expect(bad.stdout).toContain('finding: The checksum')
  })

  it('holds the release number against the one wanted', async () => {
    expect((await readback(file('knee.bin'), '--against', set, '--release', '7')).status).toBe(0)
    const other = await readback(file('knee.bin'), '--against', set, '--release', '8')
    expect(other.status).toBe(1)
    expect(other.stdout).toContain('differs: 0x0C release number: bytes 07 00 00 00, expected 08 00 00 00')
  })

  it('says that a dump with registers left out proves nothing', async () => {
    writeFileSync(file('part.csv'), `address,value\n${[...readFileSync(file('knee.bin'))].map((b, a) => (a === 0x24 ? '' : `${a},${b}\n`)).join('')}`)
    const { status, stdout } = await readback(file('part.csv'), '--against', set)
    expect(status).toBe(1)
    expect(stdout).toContain('incomplete: The dump leaves out')
    expect(stdout).toContain('missing: 0x24, 4 bytes: velocityGain')
  })

  it('takes plain values, and a form by name', async () => {
    writeFileSync(file('values.json'), '{ "velocityGain": 3.2 }')
    const { status, stdout } = await readback(file('knee.bin'), '--against', file('values.json'), '--format', 'bin')
    expect(status).toBe(1)
    expect(stdout).not.toContain('velocityGain')
    expect(stdout).toContain('currentLimit')
  })

  it.each<[string, () => string[], string]>([
    ['a wrong checksum in a HEX line', () => { writeFileSync(file('bad.hex'), readFileSync(file('knee.hex'), 'utf8').replace(/..\r?\n/, '00\n')); return [file('bad.hex'), '--schema', schema] }, 'bad.hex:1'],
    ['a dump of another length', () => { writeFileSync(file('short.bin'), Buffer.alloc(127)); return [file('short.bin'), '--schema', schema] }, 'has 127 bytes, the image 128'],
    ['a zip', () => { writeFileSync(file('zip.hex'), zipSync({ a: new Uint8Array(3) })); return [file('zip.hex'), '--schema', schema] }, 'zip archive'],
    ['no schema', () => [file('knee.bin')], 'takes one dump and the parameter schema'],
    ['a schema with a mistake', () => { writeFileSync(file('bad.schema.json'), '{ "type": "object",\n "x-image": { "length": 0 } }'); return [file('knee.bin'), '--schema', file('bad.schema.json')] }, 'bad.schema.json:'],
    ['a form that there is not', () => [file('knee.bin'), '--schema', schema, '--format', 'exe'], '--format takes bin, hex, srec, csv'],
    ['a dump that is not there', () => [file('none.bin'), '--schema', schema], 'there is no such file'],
    ['a set of several joints', () => [file('knee.bin'), '--schema', schema, '--against', 'examples/dunlin.jsonc'], 'Say which joint with --joint'],
    ['a folder', () => [folder, '--schema', schema, '--format', 'bin'], 'it is a folder'],
    ['a set that is no text', () => { writeFileSync(file('latin.json'), Buffer.from([0x7b, 0x22, 0xe4, 0x22, 0x7d])); return [file('knee.bin'), '--schema', schema, '--against', file('latin.json')] }, 'latin.json: byte 2 is no text in UTF-8'],
    ['a record that holds nonsense', () => { writeFileSync(file('odd.json'), '{ "record": "detent register image", "registers": [null, 5, { "parameter": "nobody", "typed": {} }] }'); return [file('knee.bin'), '--schema', schema, '--against', file('odd.json')] }, '"nobody" is no parameter'],
    ['a sequence number that is none', () => [file('knee.bin'), '--schema', schema, '--release', '1e3'], '"1e3" is no sequence number'],
    ['an empty sequence number', () => [file('knee.bin'), '--schema', schema, '--release', ''], '"" is no sequence number'],
    ['a value that the schema does not take', () => { writeFileSync(file('wrong.json'), '{ "velocityGain": 99 }'); return [file('knee.bin'), '--schema', schema, '--against', file('wrong.json')] }, 'velocityGain'],
  ])('refuses %s in words', async (_what, args, told) => {
    const { status, stderr } = await detent('readback', ...args())
    expect(status).not.toBe(0)
    expect(stderr).toContain(told)
    expect(stderr).not.toContain('    at ')
  })
})

describe('the command line', () => {
  it('calls both commands by name and passes on how they end', () => {
    const run = (...args: string[]) => spawnSync(process.execPath, ['node_modules/tsx/dist/cli.mjs', 'server/cli.ts', ...args], { encoding: 'utf8' })
    expect(run('readback', file('knee.bin'), '--schema', schema, '--against', set)).toMatchObject({ status: 0, stdout: expect.stringContaining('equal to') })
    expect(run('kit')).toMatchObject({ status: 2, stderr: expect.stringContaining('usage: kit verify KIT.zip [--key PUBLIC.pem]') })
  })
})

describe('a schema on the command line', () => {
  it('loses no digit: a default that no double holds is kept as it was written', async () => {
    const text = readFileSync(schema, 'utf8').replace(/("velocityGain":[\s\S]*?"default": )0\.2/, '$10.30000000000000000001')
    expect(text).toContain('0.30000000000000000001')
    writeFileSync(file('digits.schema.json'), text)
    writeFileSync(file('none.json'), '{}')
    const { stdout } = await detent('readback', file('knee.bin'), '--schema', file('digits.schema.json'), '--against', file('none.json'))
    // 0.30000000000000000001 · 2^24 rounds as 0.3 does: 5033165 = 0x4CCCCD
    expect(stdout).toContain('expected CD CC 4C 00')
  })
})

describe('kit verify', () => {
  const { privateKey } = generateKeyPairSync('ed25519')
  beforeAll(async () => {
    const read = firmware('hinge-2.1.0')
    const encoded = encodeImage(read, {}, { release: 7 })
    if (encoded.kind === 'refused') throw new Error(encoded.problems[0].message)
    const files = jointFiles(read, encoded, { machine: 'dunlin', joint: 'l1-knee', firmware: { line: 'hinge', version: '2.1.0' }, status: { kind: 'release', version: '1.7.0', sequence: 7 }, device: 0x33, toolVersion: '0.1.0' })
    const { files: all, signed } = signKit({
      toolVersion: '0.1.0', release: { machine: 'Dunlin', version: '1.7.0', sequence: 7, releasedAt: '2026-11-12T13:15:00Z', contentHash: 'c'.repeat(64), reason: '' },
      signatures: [], verdicts: [], concessions: [], joints: [], files: [...files, { path: firmwarePath('hinge', '2.1.0', 'bin'), bytes: new Uint8Array(100) }],
    }, privateKey)
    const zip = packKit(all, signed)
    writeFileSync(file('kit.zip'), zip)
    writeFileSync(file('key.pem'), publicKeyPem(privateKey))
    writeFileSync(file('other.pem'), publicKeyPem(generateKeyPairSync('ed25519').privateKey))
    writeFileSync(file('meddled.zip'), zipSync({ ...unzipSync(zip), 'joints/l1-knee/dunlin_l1-knee_1.7.0.bin': new Uint8Array(128) }))
  })

  it('proves a kit with the given key, offline', async () => {
    const { status, stdout } = await detent('kit', 'verify', file('kit.zip'), '--key', file('key.pem'))
    expect(status).toBe(0)
    expect(stdout).toMatch(/^verified: Dunlin 1\.7\.0, release number 7, 10 files\nsigned by key [0-9a-f]{64}\n$/)
  })

  it('says that the kit’s own key does not prove whose it is', async () => {
    const { status, stdout } = await detent('kit', 'verify', file('kit.zip'))
    expect(status).toBe(0)
    expect(stdout).toContain('does not prove whose it is')
  })

  it.each([
    ['another key', ['kit.zip', 'other.pem'], 'not the given key'],
    ['a changed file', ['meddled.zip', 'key.pem'], 'dunlin_l1-knee_1.7.0.bin is not the file that was signed'],
    ['what is no zip', ['key.pem', 'key.pem'], 'no zip'],
  ])('refuses %s, and exits with 1', async (_what, [kit, key], told) => {
    const { status, stdout } = await detent('kit', 'verify', file(kit), '--key', file(key))
    expect(status).toBe(1)
    expect(stdout).toContain(told)
  })

  it('tells how it is called', async () => {
    expect(await detent('kit', file('kit.zip'))).toMatchObject({ status: 2, stderr: expect.stringContaining('takes the word verify') })
    expect((await detent('kit', 'verify', file('none.zip'))).stderr).toContain('there is no such file')
  })
})
