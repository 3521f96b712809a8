import { mkdirSync } from 'node:fs'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import { readConfig } from '../config.ts'
import { holdDatabase } from '../db/only-process.ts'
import { openDatabase, type Orm } from '../db/orm.ts'
import { verifyLedger } from '../modules/ledger/verify-ledger.ts'
import { foundWorkplace } from '../modules/people/found-workplace.ts'
import { Usage } from './usage.ts'

/** Runs work on the database of DETENT_DATA, which no server may be using meanwhile. */
async function onDatabase<T>(work: (orm: Orm) => Promise<T>): Promise<T> {
  const { dataDir } = readConfig(process.env)
  mkdirSync(dataDir, { recursive: true, mode: 0o700 })
  const database = join(dataDir, 'detent.sqlite')
  const release = holdDatabase(database)
  try {
    const orm = await openDatabase(database)
    try {
      return await work(orm)
    } finally {
      await orm.close(true)
    }
  } finally {
    release()
  }
}

/** Makes the first administrator of an empty workplace and prints the link by which they set their password. */
export async function workplace(args: string[]): Promise<number> {
  const { positionals } = parseArgs({ args, allowPositionals: true, options: {} })
  if (positionals.length !== 2 || !positionals[1].includes('@')) throw new Usage('workplace takes a name and an e-mail address.')
  const [name, email] = positionals
  const { baseUrl } = readConfig(process.env)
  const link = await onDatabase((orm) => orm.em.fork().transactional((em) => foundWorkplace(em, { name, email, baseUrl, now: new Date() })))
  process.stdout.write(`${name} is the administrator of this workplace. Start the server, then open this link once to set the password:\n${link}\n`)
  return 0
}

/** Walks the ledger's whole chain; names the first entry that does not hold. */
export async function ledger(args: string[]): Promise<number> {
  const { positionals } = parseArgs({ args, allowPositionals: true, options: {} })
  if (positionals.length !== 1 || positionals[0] !== 'verify') throw new Usage('ledger takes the word verify.')
  const verdict = await onDatabase((orm) => verifyLedger(orm.em.fork()))
  process.stdout.write(verdict.holds ? `The chain holds: ${verdict.entries} entries, last hash ${verdict.lastHash}\n` : `The chain breaks at entry ${verdict.sequence}: ${verdict.why}. ${verdict.entries} entries before it hold.\n`)
  return verdict.holds ? 0 : 1
}
