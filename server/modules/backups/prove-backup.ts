import { copyFile, mkdir, rm } from 'node:fs/promises'
import { join } from 'node:path'
import { fileStore, syncDirectory } from '../../db/file-store.ts'
import { openDatabase, type Orm } from '../../db/orm.ts'
import { faultsOf, readCopy, type AskCopy } from '../../db/read-copy.ts'
import { hashOfFile, syncFile, transferStored } from '../../db/stored-files.ts'
import { verifyOwnCheckpoints } from '../ledger/verify-checkpoints.ts'
import { verifyLedger } from '../ledger/verify-ledger.ts'
import { inBackup, readRecord, type BackupRecord } from './backup-record.ts'
import { proveReleases } from './prove-releases.ts'
import { referencedFiles } from './referenced-files.ts'

export interface BackupProof {
  record: BackupRecord
  entries: number
  checkpoints: number
  releases: number
  images: number
  files: number
  /** migrations that the copy went through, because the backup is of an older Detent */
  migrated: number
}

/** A backup that does not hold: why, and that nothing was altered. */
export class BackupRefused extends Error {
  constructor(why: string) {
    super(`The backup does not hold: ${why} Nothing was replaced.`)
    this.name = 'BackupRefused'
  }
}

const refuse = (why: string): never => {
  throw new BackupRefused(why)
}

/** Copies the backup into `work`, held against its own record. */
async function takeCopy(backup: string, work: string, record: BackupRecord) {
  const database = join(work, inBackup.database)
  const found = await hashOfFile(join(backup, inBackup.database))
  if (found?.sha256 !== record.database.sha256) refuse(found ? 'its database has another SHA-256 than when it was made.' : 'its database is missing.')
  await copyFile(join(backup, inBackup.database), database)
  if ((await hashOfFile(database))?.sha256 !== record.database.sha256) refuse('its database could not be copied unaltered: look at the disk.')
  await mkdir(join(work, inBackup.files), { mode: 0o700 })
  const { trouble } = await transferStored(join(backup, inBackup.files), join(work, inBackup.files), record.files.sha256)
  if (trouble.length > 0) refuse(`its stored file ${trouble[0].sha256} is ${trouble[0].what}.`)
  return database
}

async function proveOpen(orm: Orm, work: string, record: BackupRecord): Promise<Omit<BackupProof, 'record' | 'migrated'>> {
  const em = orm.em.fork()
  const ask: AskCopy = (sql) => orm.em.getConnection().execute(sql)
  const faults = await faultsOf(ask)
  if (faults.length > 0) refuse(`${faults[0]}.`)
  const chain = await verifyLedger(em)
  if (!chain.holds) return refuse(`the ledger breaks at entry ${chain.sequence}: ${chain.why}.`)
  if (record.ledger && (chain.entries !== record.ledger.entries || chain.lastHash !== record.ledger.lastHash)) refuse(`its record names ${record.ledger.entries} ledger entries, and it holds ${chain.entries}, or others.`)
  const checkpoints = await verifyOwnCheckpoints(em)
  if (!checkpoints.holds) return refuse(`a checkpoint does not fit the ledger: ${checkpoints.why}.`)
  const files = fileStore(join(work, inBackup.files))
  const named = await referencedFiles(ask)
  for (const sha256 of named) await files.read(sha256).catch((error: Error) => refuse(`${error.message}.`))
  const releases = await proveReleases(em, files).catch((error: Error) => refuse(error.message))
  return { entries: chain.entries, checkpoints: checkpoints.checkpoints, ...releases, files: named.length }
}

/**
 * Proves a backup on a copy of it: SHA-256, integrity, foreign keys, the ledger's chain and checkpoints, every stored file, and every file of
 * every release made again, byte for byte. A backup of an older Detent is brought to the present schema first.
 *
 * @param work  folder that does not exist yet; holds the proven copy after, and is gone when the backup is refused
 * @throws BackupRefused saying what does not hold
 */
export async function proveBackup(backup: string, work: string): Promise<BackupProof> {
  const record = await readRecord(backup)
  await rm(work, { recursive: true, force: true })
  await mkdir(work, { recursive: true, mode: 0o700 })
  try {
    const database = await takeCopy(backup, work, record)
    const before = await readCopy(database, async (ask) => {
      const faults = await faultsOf(ask)
      if (faults.length > 0) refuse(`${faults[0]}.`)
      return (await ask('select 1 from migration')).length
    })
    const orm = await openDatabase(database)
    let proven: Omit<BackupProof, 'record' | 'migrated'>
    let after: number
    try {
      proven = await proveOpen(orm, work, record)
      after = (await orm.em.getConnection().execute('select 1 from migration')).length
    } finally {
      await orm.close(true)
    }
    await syncFile(database)
    await syncDirectory(work)
    return { record, ...proven, migrated: after - before }
  } catch (error) {
    await rm(work, { recursive: true, force: true })
    throw error
  }
}
