import { spawn } from 'node:child_process'
import { mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { MadeBenchKey } from '../../../shared/contract/bench-keys.ts'
import { curlExamples } from '../../../src/features/bench-keys/curl-lines.ts'
import { password } from '../../support/workplace.ts'
import { aBench, fileOf, l1, readBoard, type Bench } from '../boards/a-bench.ts'

let w: Bench
let close: () => void
let lines: string[]
let folder: string

/** Runs lines as pasted into a shell, all in one, in a folder of their own. */
function paste(text: string): Promise<{ status: number | null; out: string; err: string }> {
  return new Promise((done, fail) => {
    const shell = spawn('sh', ['-c', text], { cwd: folder, env: { PATH: process.env.PATH, NO_PROXY: '127.0.0.1', no_proxy: '127.0.0.1' } })
    let [out, err] = ['', '']
    shell.stdout.on('data', (data: Buffer) => (out += String(data)))
    shell.stderr.on('data', (data: Buffer) => (err += String(data)))
    shell.on('error', fail)
    shell.on('close', (status) => done({ status, out, err }))
  })
}

beforeAll(async () => {
  w = await aBench()
  const server = w.app.listen(0, '127.0.0.1')
  await new Promise((done) => server.once('listening', done))
  close = () => server.close()
  folder = mkdtempSync(join(tmpdir(), 'detent-curl-'))
  const { secret } = (await w.builder.post('/api/account/bench-keys', { name: 'bench two', machines: ['dunlin'], days: 30, password }).expect(201)).body as MadeBenchKey
  lines = curlExamples({ origin: `http://127.0.0.1:${(server.address() as AddressInfo).port}`, secret: secret!, machine: 'dunlin', version: '1.1.0', joint: 'l1-knee', serial: l1 }).map((e) => e.lines)
})
afterAll(() => close())

/** curl is part of what the screen shows; without it these lines can't be tried. On Debian: apt-get install curl. */
describe('the lines shown with a bench key, pasted into a shell', () => {
  it('read the boards', async () => {
    const { status, out, err } = await paste(`${lines[0]}\n${lines[1]}`)
    expect({ status, err }).toEqual({ status: 0, err: '' })
    expect((JSON.parse(out) as { machine: string }).machine).toBe('dunlin')
  })

  it('save the bytes under their own name', async () => {
    const { status, err } = await paste(`${lines[0]}\n${lines[2]}`)
    expect({ status, err }).toEqual({ status: 0, err: '' })
    const saved = readdirSync(folder)
    expect(saved).toEqual([expect.stringMatching(/l1-knee.*1\.1\.0.*\.hex$/)])
    expect(readFileSync(join(folder, saved[0])).equals(await fileOf(w.builder, '1.1.0', 'l1-knee', 'hex'))).toBe(true)
  })

  it('record a flash', async () => {
    const { status, out, err } = await paste(`${lines[0]}\n${lines[3]}`)
    expect({ status, err }).toEqual({ status: 0, err: '' })
    expect(JSON.parse(out)).toMatchObject({ serial: l1, known: 'recorded' })
  })

  it('record a flash with its read-back', async () => {
    writeFileSync(join(folder, 'dump.bin'), await fileOf(w.builder, '1.1.0', 'l1-knee'))
    const { status, out, err } = await paste(`${lines[0]}\n${lines[4]}`)
    expect({ status, err }).toEqual({ status: 0, err: '' })
    expect(JSON.parse(out)).toMatchObject({ serial: l1, state: 'current', known: 'read back' })
    expect(await readBoard(w.builder, l1)).toMatchObject({ known: 'read back', events: [{ kind: 'read-back verified', benchKey: 'bench two' }, { kind: 'flash recorded' }, { kind: 'flash recorded' }] })
  })
})
