import { createPublicKey } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { parseArgs } from 'node:util'
import { exportCheckpoints } from '../modules/ledger/read-checkpoints.ts'
import { verifyCheckpointFile, verifyOwnCheckpoints } from '../modules/ledger/verify-checkpoints.ts'
import { verifyLedger } from '../modules/ledger/verify-ledger.ts'
import type { CheckpointsVerdict } from '../../shared/contract/ledger.ts'
import { onDatabase } from './on-database.ts'
import { Usage } from './usage.ts'

const told = (verdict: CheckpointsVerdict, whose: string) =>
  verdict.holds
    ? `${whose}: ${verdict.checkpoints} hold${verdict.newest ? `; entries up to ${verdict.upTo} stand as signed on ${verdict.newest} or before` : ''}.`
    : `${whose} do not hold: line ${verdict.line}, ${verdict.why}. ${verdict.goodUpTo === 0 ? 'No entry is vouched for by one before it.' : `Entries up to ${verdict.goodUpTo} are as they were signed.`}`

/** Walks the ledger's whole chain, and holds its own checkpoints and a file of them against it. Exit code 1 when anything does not hold. */
async function verify(checkpoints: string | undefined, key: string | undefined): Promise<number> {
  const file = checkpoints === undefined ? null : readFileSync(checkpoints, 'utf8')
  const keys = key === undefined ? [] : [createPublicKey(readFileSync(key))]
  return onDatabase(async (orm) => {
    const em = orm.em.fork()
    const chain = await verifyLedger(em)
    const own = await verifyOwnCheckpoints(em)
    const given = file === null ? null : await verifyCheckpointFile(em, file, keys)
    process.stdout.write(chain.holds ? `The chain holds: ${chain.entries} entries, last hash ${chain.lastHash}\n` : `The chain breaks at entry ${chain.sequence}: ${chain.why}. ${chain.entries} entries before it hold.\n`)
    process.stdout.write(`${told(own, 'Checkpoints in the database')}\n`)
    if (given) process.stdout.write(`${told(given, `Checkpoints of ${checkpoints}`)}\n`)
    return chain.holds && own.holds && (given?.holds ?? true) ? 0 : 1
  })
}

/** `ledger verify` and `ledger checkpoints`. */
export async function ledger(args: string[]): Promise<number> {
  const { positionals, values } = parseArgs({ args, allowPositionals: true, options: { checkpoints: { type: 'string' }, key: { type: 'string' } } })
  if (positionals.length === 1 && positionals[0] === 'verify') return verify(values.checkpoints, values.key)
  if (positionals.length === 1 && positionals[0] === 'checkpoints' && Object.keys(values).length === 0) {
    process.stdout.write(await onDatabase((orm) => exportCheckpoints(orm.em.fork())))
    return 0
  }
  throw new Usage('ledger takes the word verify, or checkpoints.')
}
