import { once } from 'node:events'
import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { pino } from 'pino'
import { buildApp } from '../app.ts'
import { readConfig } from '../config.ts'
import type { BenchResult } from '../control/bench.ts'
import { fileStore } from '../db/file-store.ts'
import { openDatabase, type Orm } from '../db/orm.ts'
import type { Services } from '../http/services.ts'
import { JobBoard } from '../jobs/job-board.ts'
import { onWorkers } from '../jobs/on-workers.ts'
import { draftChange } from '../modules/changes/draft-change.ts'
import { again } from '../modules/changes/locate.ts'
import { saveDraftText } from '../modules/changes/save-draft.ts'
import { analysisStore } from '../modules/checks/analysis-store.ts'
import { FirmwareLine } from '../modules/firmware/firmware-line.entity.ts'
import { FirmwareVersion } from '../modules/firmware/firmware-version.entity.ts'
import { hashOf } from '../modules/firmware/schema-cache.ts'
import { openSeals } from '../modules/people/second-factor/open-seals.ts'
import { keyFiles } from '../modules/keys/key-store.ts'
import { openWorkplaceKeys } from '../modules/keys/workplace-keys.ts'
import { Machine } from '../modules/machines/machine.entity.ts'
import { hashPassword } from '../modules/people/passwords.ts'
import { Person } from '../modules/people/person.entity.ts'
import { RoleGrant } from '../modules/people/role-grant.entity.ts'
import { foundPolicy } from '../modules/policy/found-policy.ts'
import { projectRoot } from '../project-root.ts'

const email = 'bench@dunlin.example'
const password = 'a password for the bench alone'
const mostWarmUp = 25

/** An engineer, a machine with its policy, published firmware, and a draft of one knee; answers the draft's key. */
async function furnish(orm: Orm, schema: unknown, now: Date): Promise<string> {
  const em = orm.em.fork()
  const person = em.create(Person, { name: 'Bench', email, passwordHash: await hashPassword(password), createdAt: now })
  em.create(RoleGrant, { person, role: 'controls engineer', machine: null, grantedAt: now, confirmedAt: now })
  const machine = em.create(Machine, { key: 'dunlin', name: 'Dunlin', description: '', createdAt: now })
  foundPolicy(em, machine, now)
  const line = em.create(FirmwareLine, { key: 'hinge', name: 'Hinge', description: '', createdAt: now })
  await em.flush()
  em.create(FirmwareVersion, { line, version: '2.1.0', state: 'published', schemaText: JSON.stringify(schema), schemaHash: hashOf(schema), notes: '', uploadedBy: person, writers: [person.id], createdAt: now, publishedBy: person, publishedAt: now })
  await em.flush()
  const change = await orm.em.fork().transactional((tx) => draftChange(tx, { machine, title: 'Bench', person, now }))
  const text = readFileSync(join(projectRoot(), 'examples', 'knee.jsonc'), 'utf8')
  await orm.em.fork().transactional(async (tx) => saveDraftText(tx, await again(tx, change), text, { person: await tx.findOneOrFail(Person, { email }), now }))
  return `dunlin-${change.number}`
}

/** A person's requests, with cookie and token. */
async function signIn(api: string): Promise<(method: string, path: string, body?: unknown) => Promise<Response>> {
  const session = await fetch(`${api}/session`, { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify({ email, password }) })
  // The answer's last byte waits for the session to be stored.
  await session.text()
  const cookie = session.headers.getSetCookie().map((c) => c.split(';')[0]).join('; ')
  const { token } = (await (await fetch(`${api}/me`, { headers: { cookie } })).json()) as { token: string }
  return async (method, path, body) => {
    const response = await fetch(`${api}${path}`, { method, headers: { cookie, 'X-Detent-Token': token, 'Content-Type': 'application/json' }, ...(body === undefined ? {} : { body: JSON.stringify(body) }) })
    if (!response.ok) throw new Error(`${method} ${path} answered ${response.status}: ${await response.text()}`)
    return response
  }
}

/** One joint's check through HTTP at each of many gains never checked before, sweeps going on behind on a worker thread. */
export async function benchQuickCheck(clock: () => number, schema: unknown, runs: number): Promise<BenchResult & { p95_s: number }> {
  const folder = mkdtempSync(join(tmpdir(), 'detent-bench-'))
  const now = new Date()
  const orm = await openDatabase(join(folder, 'detent.sqlite'))
  const fromSource = import.meta.url.endsWith('.ts')
  const workerFile = fileURLToPath(new URL(fromSource ? '../jobs/worker.ts' : './worker.js', import.meta.url))
  const checks = new JobBoard({ threads: onWorkers({ workerFile, threads: 1, ...(fromSource ? { execArgv: ['--import', 'tsx'] } : {}) }), store: analysisStore(orm, () => now) })
  const services: Services = { config: readConfig({ DETENT_MODE: 'workplace', DETENT_DATA: folder, DETENT_SECOND_FACTOR: 'optional', DETENT_COSTLY_PER_MINUTE: '1000000' }), orm, now: () => now, checks, files: fileStore(join(folder, 'files')), keys: await openWorkplaceKeys(orm.em.fork(), keyFiles(folder), now), seals: openSeals(folder).seals, mailQueued: () => {} }
  const server = buildApp({ services, log: pino({ level: 'silent' }), sessionSecret: 'for the bench alone' }).listen(0, '127.0.0.1')
  try {
    await once(server, 'listening')
    const key = await furnish(orm, schema, now)
    const ask = await signIn(`http://127.0.0.1:${(server.address() as AddressInfo).port}/api`)
    const spent: number[] = []
    const warmUp = Math.min(mostWarmUp, runs)
    let from = 3.2
    for (let k = 0; k < warmUp + runs; k += 1) {
      const to = Number((2.5 + k / 100).toPrecision(4))
      await ask('PATCH', `/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/velocityGain', from, to }] })
      from = to
      const start = clock()
      const view = (await (await ask('GET', `/changes/${key}/check`)).json()) as { verdict: string }
      if (k >= warmUp) spent.push(clock() - start)
      if (view.verdict !== 'stable') throw new Error(`the bench's joint is ${view.verdict} at ${to}`)
    }
    spent.sort((a, b) => a - b)
    return { name: 'quick-check-http', median_s: spent[Math.floor(runs / 2)], min_s: spent[0], max_s: spent[runs - 1], runs, p95_s: spent[Math.ceil(0.95 * runs) - 1] }
  } finally {
    server.closeAllConnections()
    await new Promise((done) => server.close(done))
    await checks.close()
    await orm.close(true)
    rmSync(folder, { recursive: true, force: true })
  }
}
