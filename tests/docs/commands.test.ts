import { spawnSync } from 'node:child_process'
import { cpSync, mkdtempSync, readdirSync, readFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { startServer } from '../e2e/server.ts'

const read = (file: string) => readFileSync(file, 'utf8')
const scripts = (JSON.parse(read('package.json')) as { scripts: Record<string, string> }).scripts

/** Commands as the documents write them: whole lines set in, and words set as code within a sentence. */
function commandsIn(file: string): string[] {
  const text = read(file)
  const begins = /^(?:DETENT_\w+=\S+ )*(?:npm|npx|node) /
  const lines = [...text.matchAll(/^ {4}(\S.*)$/gm)].map((m) => m[1]).filter((l) => begins.test(l))
  const within = [...text.matchAll(/`([^`\n]+)`/g)].map((m) => m[1]).filter((c) => begins.test(c))
  return [...new Set([...lines, ...within])]
}

const folder = mkdtempSync(join(tmpdir(), 'detent-docs-'))
const data = join(folder, 'workplace')

/** Runs a command as written, `/srv/detent` and the files it writes put into a folder of the test's own. */
function run(command: string, input: Record<string, string> = {}) {
  const local = Object.entries(input).reduce((c, [from, to]) => c.replaceAll(from, to), command.replaceAll('/srv/detent', data).replaceAll(/--out (\S+)/g, (_, name: string) => `--out ${join(folder, name)}`))
  const { status, stdout, stderr } = spawnSync('bash', ['-c', local], { encoding: 'utf8', env: { ...process.env, DETENT_MODE: 'workplace' } })
  return { status, out: stdout + stderr }
}

/** Not run word for word, with the test that does what they do. */
const elsewhere: Record<string, string> = {
  'npm ci && npm test': 'this very run',
  'npm test': 'this very run',
  'npm run pictures': 'tests/e2e/pictures.ts: the screens it takes are those of tests/e2e/screens.test.ts',
}

const documents = ['README.md', 'DEVELOPERS.md', 'server/control/MODEL.md', 'examples/README.md']
const all = [...new Set(documents.flatMap(commandsIn))]
const isStart = (c: string) => /npm start$/.test(c)
const isWorkplace = (c: string) => c.startsWith('DETENT_DATA=') && c.includes('detent --')
const isPlain = (c: string) => c.startsWith('npm run -s detent --')
/** They need a browser, minutes or a change of the tree; what they call is there and begins to run. */
const called = all.filter((c) => !(c in elsewhere) && !isStart(c) && !isWorkplace(c) && !isPlain(c))

describe('the commands of the documents', () => {
  it('are found', () => {
    expect(all.length).toBeGreaterThan(15)
    expect(all).toContain('npm ci && npm start')
  })

  it.each(all.filter(isPlain))('%s', (command) => {
    const { status, out } = run(command)
    expect(status, out).toBe(0)
  })

  it('npm start serves, with the environment of a real workplace, on the data folder named', async () => {
    const starts = all.filter(isStart)
    expect(starts.length).toBeGreaterThanOrEqual(3)
    for (const start of starts) expect(start).toMatch(/^(npm ci && |(DETENT_\w+=\S+ )*)npm start$/)
    // what `npm start` runs is what this starts
    expect(scripts.start).toBe('node server/launch.mjs')
    const secure = starts.find((s) => s.includes('https:'))!
    const env = Object.fromEntries([...secure.matchAll(/(DETENT_\w+)=(\S+)/g)].map((m) => [m[1], m[2].replace('/srv/detent', data)]))
    const server = await startServer(env)
    const cookie = await fetch(`${server.url}/api/workplace`)
    expect([cookie.status, cookie.headers.get('strict-transport-security')]).toEqual([200, 'max-age=31536000'])
    await server.stop()
  })

  it('of a stopped workplace: first administrator, backup, list, prove, restore, ledger', () => {
    const commands = all.filter(isWorkplace)
    const find = (word: string) => commands.filter((c) => c.includes(word))
    expect(commands.length).toBe(7)
    for (const command of [...find('-- workplace'), ...find('-- backup'), ...find('-- restore'), ...find('-- ledger'), ...find('-- second-factor')]) {
      const [made] = command.includes('restore') ? readdirSync(join(data, 'backups')).filter((n) => !n.startsWith('.')) : ['']
      const { status, out } = run(command, { BACKUP: join(data, 'backups', made ?? '') })
      expect(status, `${command}: ${out}`).toBe(0)
    }
  })

  it.each(called)('%s: what it calls is there', (command) => {
    const [, tool, rest] = /^(?:npx (tsx|vitest)|npm run) (.*)$/.exec(command) ?? []
    if (tool === 'vitest') {
      const file = rest.split(' ').at(-1)!
      const { status, stdout } = spawnSync(process.execPath, ['node_modules/vitest/vitest.mjs', 'list', '--project', 'unit', '--filesOnly', file], { encoding: 'utf8' })
      expect([status, stdout.trim().split('\n').length]).toEqual([0, 1])
    } else if (tool === 'tsx') expect(read(rest.split(' ')[0]).length).toBeGreaterThan(0)
    else {
      const name = rest.replace(/^-s /, '').split(' ')[0]
      expect(scripts[name], command).toBeDefined()
    }
  })

  it('npm run migration writes nothing where the entities match the snapshot', () => {
    // in a copy, so that a difference would not be written into the tree
    const copy = join(folder, 'tree')
    for (const part of ['server', 'shared', 'schemas', 'package.json', 'tsconfig.json']) cpSync(part, join(copy, part), { recursive: true })
    const { status, stderr } = spawnSync('bash', ['-c', `ln -sfn "$PWD/node_modules" "${copy}/node_modules" && cd "${copy}" && npm run migration -- what-it-does`], { encoding: 'utf8' })
    expect(status, stderr).toBe(0)
    expect(stderr).toContain('Nothing to migrate')
  })
})
