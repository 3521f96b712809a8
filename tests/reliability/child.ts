import fs from 'node:fs/promises'
import { syncBuiltinESMExports } from 'node:module'
import { createServer, type Server } from 'node:http'
import { join } from 'node:path'
import express from 'express'
import { pino } from 'pino'
import { buildApp } from '../../server/app.ts'
import { readConfig } from '../../server/config.ts'
import { fileStore } from '../../server/db/file-store.ts'
import { ImmediateDialect } from '../../server/db/immediate-dialect.ts'
import { openDatabase, type OpenOptions } from '../../server/db/orm.ts'
import type { Services } from '../../server/http/services.ts'
import { inPlace } from '../../server/jobs/in-place.ts'
import { JobBoard } from '../../server/jobs/job-board.ts'
import { analysisStore } from '../../server/modules/checks/analysis-store.ts'
import { openSeals } from '../../server/modules/people/second-factor/open-seals.ts'
import { keyFiles } from '../../server/modules/keys/key-store.ts'
import { openWorkplaceKeys } from '../../server/modules/keys/workplace-keys.ts'
import { filling, look, withRebuild } from './a-rebuild.ts'
import { faultsIn, summary } from './invariants.ts'
import { makePeopleAndMachine } from './people-and-machine.ts'
import type { Asked, Kill } from './protocol.ts'

/**
 * The server in a process that can be killed at a chosen step: the k-th SQL statement or file operation since it was armed. It dies by SIGKILL
 * before the step, right after handing it to SQLite's thread or the kernel, or after its answer.
 */
let steps = 0
let armed: Kill | null = null
/** the statement that an armed child waits for has run; its COMMIT is next */
let ran = false
const die = () => process.kill(process.pid, 'SIGKILL')

function modeNow(sql: string) {
  if (!armed) return null
  if ('at' in armed) return armed.at === steps ? armed.mode : null
  ran ||= sql.includes(armed.committed)
  return ran && sql.startsWith('COMMIT') ? 'after' : null
}

async function step<T>(work: () => Promise<T>, sql = ''): Promise<T> {
  steps += 1
  const mine = modeNow(sql)
  if (mine === 'before') die()
  const going = work()
  if (mine === 'during') die()
  const result = await going
  if (mine === 'after') die()
  return result
}

interface Queries {
  _query(connection: unknown, query: unknown): Promise<unknown>
}

/** Counts every statement and every file operation of the store. */
function countSteps() {
  const dialect = ImmediateDialect.prototype as unknown as Queries
  const query = dialect._query
  dialect._query = function counted(this: Queries, connection, asked) {
    return step(() => query.call(this, connection, asked), (asked as { sql: string }).sql)
  }
  const { open, rename, mkdir, rm } = fs
  fs.rename = (...args) => step(() => rename(...args))
  fs.rm = (...args) => step(() => rm(...args))
  fs.mkdir = ((...args: Parameters<typeof mkdir>) => step(() => mkdir(...args))) as typeof fs.mkdir
  fs.open = async (...args) => {
    const handle = await step(() => open(...args))
    const { sync, write } = handle
    handle.sync = () => step(() => sync.call(handle))
    handle.write = ((...given: unknown[]) => step(() => (write as (...a: unknown[]) => Promise<unknown>).apply(handle, given))) as never
    return handle
  }
  syncBuiltinESMExports()
}

interface Opened {
  services: Services
  server: Server
}

let opened: Opened | null = null

async function open(folder: string, options: OpenOptions = {}): Promise<number> {
  const orm = await openDatabase(join(folder, 'detent.sqlite'), options)
  const now = () => new Date()
  const services: Services = {
    config: readConfig({ DETENT_MODE: 'workplace', DETENT_DATA: folder, DETENT_SECOND_FACTOR: 'optional', DETENT_COSTLY_PER_MINUTE: '1000000' }),
    orm,
    now,
    checks: new JobBoard({ threads: inPlace(), store: analysisStore(orm, now) }),
    files: fileStore(join(folder, 'files')),
    keys: await openWorkplaceKeys(orm.em.fork(), keyFiles(folder), now()),
    seals: openSeals(folder).seals,
    mailQueued: () => {},
  }
  const server = createServer(buildApp({ services, log: pino({ level: process.env.DETENT_LOG ?? 'silent' }), sessionSecret: 'a secret for tests alone' }))
  await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
  opened = { services, server }
  return (server.address() as { port: number }).port
}

/** Express and one point read, nothing else: what the rest is measured against. */
async function bare({ orm }: Services): Promise<number> {
  const app = express()
  app.get('/:id', (req, res, next) => {
    orm.em.getConnection().execute('select id, version, sequence from release where id = ?', [Number(req.params.id)]).then((rows) => res.json(rows), next)
  })
  const server = createServer(app)
  server.unref()
  await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
  return (server.address() as { port: number }).port
}

async function close() {
  const { server, services } = opened!
  opened = null
  server.closeAllConnections()
  await new Promise((done) => server.close(done))
  await services.checks.close()
  await services.orm.close(true)
}

async function answer(asked: Asked): Promise<unknown> {
  switch (asked.do) {
    case 'open':
      return open(asked.folder)
    case 'close':
      return close()
    case 'prepare':
      return makePeopleAndMachine(opened!.services, asked.password)
    case 'check':
      return { faults: await faultsIn(opened!.services), summary: await summary(opened!.services) }
    case 'arm':
      steps = 0
      ran = false
      armed = asked.kill
      return null
    case 'steps':
      return steps
    case 'memory':
      globalThis.gc?.()
      return process.memoryUsage().rss
    case 'bare':
      return bare(opened!.services)
    case 'fill':
      return filling(asked.folder)
    case 'look':
      return look(asked.folder)
    case 'migrate': {
      steps = 0
      armed = asked.kill
      await (await openDatabase(join(asked.folder, 'detent.sqlite'), asked.rebuild ? withRebuild : {})).close(true)
      return steps
    }
  }
}

countSteps()
process.on('message', (asked: Asked) => {
  answer(asked).then(
    (result) => process.send!({ id: asked.id, result }),
    (error: Error) => process.send!({ id: asked.id, error: `${error.message}\n${error.stack}` }),
  )
})
process.on('disconnect', () => process.exit(0))
process.send!({ id: 0, result: 'ready' })
