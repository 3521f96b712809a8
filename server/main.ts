import { mkdirSync } from 'node:fs'
import { createServer } from 'node:http'
import { availableParallelism } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { buildApp } from './app.ts'
import { readConfig } from './config.ts'
import { fileStore } from './db/file-store.ts'
import { secretFile } from './db/secret-file.ts'
import { holdDatabase } from './db/only-process.ts'
import { assertTerms } from './db/terms.ts'
import { clearCutOff, underMark } from './demo/cut-off.ts'
import { demoBegins, makeDemo } from './demo/make-demo.ts'
import { makeLog } from './http/log.ts'
import { serveClient } from './http/serve-client.ts'
import type { Services } from './http/services.ts'
import { JobBoard } from './jobs/job-board.ts'
import { onWorkers } from './jobs/on-workers.ts'
import { startDailyBackups } from './modules/backups/daily-backup.ts'
import { openWorkplaceDatabase, placesOf } from './modules/backups/open-workplace.ts'
import { analysisStore } from './modules/checks/analysis-store.ts'
import { keyFiles } from './modules/keys/key-store.ts'
import { openWorkplaceKeys } from './modules/keys/workplace-keys.ts'
import { openSeals, sealKeyName } from './modules/people/second-factor/open-seals.ts'
import { startMailSender } from './modules/mail/send-mail.ts'
import { Person } from './modules/people/person.entity.ts'

const log = makeLog(process.env.DETENT_LOG ?? (process.env.DETENT_MODE === 'workplace' ? 'info' : 'warn'))

/** Runs the server; it takes requests once `clientBuilt` is there. */
async function start(clientBuilt: Promise<unknown>) {
  const config = readConfig(process.env)
  mkdirSync(config.dataDir, { recursive: true, mode: 0o700 })
  const places = placesOf(config)
  const release = holdDatabase(places.database)
  if (config.mode === 'demo') clearCutOff(config.dataDir, places)
  const orm = await openWorkplaceDatabase(config)
  log.info(await assertTerms(orm, places.database), 'the database is open')
  const { secret: sessionKey } = secretFile(join(config.dataDir, 'session.key'), 'the key that signs session cookies')
  const here = fileURLToPath(new URL('.', import.meta.url))
  const checks = new JobBoard({
    threads: onWorkers({ workerFile: join(here, 'worker.js'), threads: availableParallelism() }),
    store: analysisStore(orm, () => new Date()),
    warn: (error) => log.error(error, 'a result was not stored'),
  })
  let wake = () => {}
  const toldFirst = config.mode === 'demo' && (await orm.em.fork().count(Person)) === 0
  const keys = await openWorkplaceKeys(orm.em.fork(), keyFiles(config.dataDir), toldFirst ? demoBegins(new Date()) : new Date())
  const { seals, made } = openSeals(config.dataDir)
  if (made && (await orm.em.fork().count(Person, { secondFactorAt: { $ne: null } })) > 0)
    log.error(`The key of the second factors was missing and made anew: the ones set up before are good no more. Put ${sealKeyName} back, or let people sign in with recovery codes.`)
  const services: Services = { config, orm, now: () => new Date(), checks, files: fileStore(places.files), keys, seals, mailQueued: () => wake() }
  if (toldFirst) await underMark(config.dataDir, (sql) => orm.em.getConnection().execute(sql), () => makeDemo(services))
  const sender = startMailSender(services, log)
  wake = () => sender.wake()
  const backups = startDailyBackups(services, log)
  const app = buildApp({ services, log, sessionSecret: sessionKey.toString('base64url'), client: serveClient(join(here, '../client')) })
  await clientBuilt
  const server = createServer(app)
  server.listen(config.port, config.host, () => {
    const address = server.address()
    const port = typeof address === 'object' && address ? address.port : config.port
    process.stdout.write(`Detent serves ${config.mode === 'demo' ? 'the demo workplace' : 'your workplace'} at http://${config.host}:${port}\n`)
  })
  let closing = false
  const close = async () => {
    if (closing) return
    closing = true
    server.closeAllConnections()
    await new Promise((done) => server.close(done))
    await backups.stop()
    await sender.stop()
    await checks.close()
    await orm.close(true)
    release()
    process.exit(0)
  }
  process.on('SIGTERM', () => void close())
  process.on('SIGINT', () => void close())
}

export const serve = (clientBuilt: Promise<unknown> = Promise.resolve()): Promise<void> =>
  start(clientBuilt).catch((error: Error) => {
    process.stderr.write(`Detent could not start: ${error.message}\n`)
    process.exit(1)
  })
