import { spawn, spawnSync, type ChildProcess } from 'node:child_process'
import { existsSync, readFileSync, readdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { bundleChild, temporary } from './a-child.ts'

let bundle: ReturnType<typeof bundleChild>
const data = temporary()
const env = (folder = data) => ({ ...process.env, DETENT_DATA: folder, DETENT_PORT: '0', DETENT_MODE: 'workplace', DETENT_LOG: 'info', DETENT_BACKUP_HOUR: 'off' })
const running: ChildProcess[] = []

beforeAll(() => {
  bundle = bundleChild('shutdown')
}, 120_000)
afterAll(() => {
  for (const child of running) child.kill('SIGKILL')
  bundle?.remove()
  rmSync(data, { recursive: true, force: true })
})

interface Running {
  output: () => string
  stop(signal: NodeJS.Signals): Promise<{ code: number | null; signal: NodeJS.Signals | null }>
}

/** The program itself, as `npm start` runs it once it is built. */
function start(folder = data): Promise<Running> {
  const child = spawn(process.execPath, ['--input-type=module', '--eval', `(await import(${JSON.stringify(bundle.file('main'))})).serve()`], { env: env(folder), stdio: ['ignore', 'pipe', 'pipe'] })
  running.push(child)
  let output = ''
  const ended = new Promise<{ code: number | null; signal: NodeJS.Signals | null }>((done) => child.on('exit', (code, signal) => done({ code, signal })))
  return new Promise((done, fail) => {
    const read = (data: Buffer) => {
      output += String(data)
      if (output.includes('Detent serves'))
        done({
          output: () => output,
          stop(signal) {
            child.kill(signal)
            return ended
          },
        })
    }
    child.stdout.on('data', read)
    child.stderr.on('data', read)
    void ended.then(({ code }) => fail(new Error(`ended with ${code}: ${output}`)))
  })
}

const detent = (...args: string[]) => spawnSync(process.execPath, [bundle.file('cli'), ...args], { encoding: 'utf8', env: env() })

it('says on what terms the database is open, and refuses a second server and the commands that write meanwhile', async () => {
  const server = await start()
  try {
    const terms = server.output().split('\n').find((line) => line.includes('the database is open'))
    expect(JSON.parse(terms!)).toMatchObject({ connections: 1, lockingMode: 'exclusive', journalMode: 'wal', foreignKeys: true, synchronous: 2, sqlite: expect.stringMatching(/^3\./) })
    await expect(start()).rejects.toThrow(/ended with 1: Detent could not start: .* is in use by process \d+\. One process serves a database/)
    // without the file that names the holder, SQLite's own lock refuses all the same
    rmSync(join(data, 'detent.sqlite.lock'))
    await expect(start()).rejects.toThrow(/ended with 1: Detent could not start: .* is in use by another process/)
    for (const command of [['backup'], ['ledger', 'verify'], ['workplace', 'Wren Halloran', 'wren@dunlin.example']]) {
      const { status, stderr } = detent(...command)
      expect(status).toBe(1)
      expect(stderr).toContain('is in use by')
    }
  } finally {
    await server.stop('SIGTERM')
  }
}, 120_000)

it('ends cleanly on SIGTERM, takes over after SIGKILL, and is kept by the commands', async () => {
  const first = await start()
  expect(await first.stop('SIGTERM')).toEqual({ code: 0, signal: null })
  expect(readdirSync(data).filter((name) => /-wal|-shm|\.lock/.test(name))).toEqual([])
  const second = await start()
  expect(existsSync(join(data, 'detent.sqlite.lock'))).toBe(true)
  expect(await second.stop('SIGKILL')).toEqual({ code: null, signal: 'SIGKILL' })
  expect(existsSync(join(data, 'detent.sqlite.lock'))).toBe(true)
  const third = await start()
  expect(await third.stop('SIGTERM')).toEqual({ code: 0, signal: null })

  const verified = detent('ledger', 'verify')
  expect(verified).toMatchObject({ status: 0, stdout: expect.stringContaining('The chain holds: 1 entries') })
  const made = detent('backup', '--with-private-key')
  expect(made).toMatchObject({ status: 0, stdout: expect.stringContaining('whoever has it can sign kits') })
  const path = made.stdout.split('\n')[0]
  expect(readFileSync(join(path, 'workplace.key'), 'utf8')).toContain('PRIVATE KEY')
  expect(detent('backup', '--list').stdout).toContain('with the private key')
  expect(detent('restore', path, '--only-prove')).toMatchObject({ status: 0, stdout: expect.stringContaining('Proven: the backup of') })
  const restored = detent('restore', path.split('/').at(-1)!)
  expect(restored).toMatchObject({ status: 0, stdout: expect.stringContaining('with 2 ledger entries, is kept in') })
  expect(detent('ledger', 'verify').stdout).toContain('The chain holds: 2 entries')
  expect(detent('restore', 'nothing-there')).toMatchObject({ status: 1, stderr: expect.stringContaining('There is no backup "nothing-there"') })
  expect(detent('backup', 'x')).toMatchObject({ status: 2 })
}, 180_000)
