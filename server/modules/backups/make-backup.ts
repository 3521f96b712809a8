import { chmod, copyFile, mkdir, rename, rm, writeFile } from 'node:fs/promises'
import { join } from 'node:path'
import type { BackupOccasion } from '../../../shared/contract/backups.ts'
import { syncDirectory } from '../../db/file-store.ts'
import type { Orm } from '../../db/orm.ts'
import { faultsOf, readCopy, type AskCopy } from '../../db/read-copy.ts'
import { hashOfFile, listStored, syncFile, transferStored } from '../../db/stored-files.ts'
import { DomainError } from '../../http/errors.ts'
import { TOOL_VERSION } from '../../tool-version.ts'
import { checkpointLine, CHECKPOINT_TYPE, type Checkpoint } from '../ledger/checkpoint-line.ts'
import { backupName, backupNames, inBackup, type BackupRecord } from './backup-record.ts'
import { referencedFiles } from './referenced-files.ts'

export interface BackupSource {
  orm: Orm
  /** the stored files' directory */
  files: string
  /** where backups go */
  folder: string
}

export interface BackupWish {
  now: Date
  occasion: BackupOccasion
  /** file of the workplace's private key, to be taken along; null leaves it out, as every backup does unless somebody asks */
  privateKey?: string | null
  /** file of the key that opens second factors, likewise */
  sealKey?: string | null
}

export interface MadeBackup {
  name: string
  record: BackupRecord
}

/** Folders in which one is being made now: a second one would take as long again and find the same. */
const underWay = new Set<string>()

/** Is a backup being made? Its copy of the database may name files that the database names no more. */
export const backupUnderWay = () => underWay.size > 0

const has = async (ask: AskCopy, table: string) => (await ask(`select 1 from sqlite_master where type = 'table' and name = '${table}'`)).length > 0

/** What a copy holds, read from the copy. */
async function lookInto(database: string) {
  return readCopy(database, async (ask) => {
    const faults = await faultsOf(ask)
    if (faults.length > 0) throw new DomainError('verification-failed', `The copy of the database is not whole: ${faults[0]}. No backup was made, and the ones made before are kept; look at the disk, and restore the newest of them if the database itself is not whole.`)
    const [head] = (await has(ask, 'ledger_entry')) ? await ask<{ sequence: number; hash: string }>('select sequence, hash from ledger_entry order by sequence desc limit 1') : []
    return {
      sqlite: (await ask<{ v: string }>('select sqlite_version() as v'))[0].v,
      ledger: head ? { entries: head.sequence, lastHash: head.hash } : null,
      publicKeys: (await has(ask, 'workplace_key')) ? (await ask<{ public_key: string }>('select public_key from workplace_key order by id')).map((row) => row.public_key) : [],
      checkpoints: (await has(ask, 'ledger_checkpoint')) ? (await ask<Omit<Checkpoint, 'type' | 'at'> & { at: number }>('select sequence, hash, at, occasion, key_id as keyId, signature from ledger_checkpoint order by id')) : [],
      referenced: await referencedFiles(ask),
    }
  })
}

/** Writes a backup into a folder of no name yet. */
async function write({ orm, files }: BackupSource, aside: string, { now, occasion, privateKey, sealKey }: BackupWish): Promise<BackupRecord> {
  const database = join(aside, inBackup.database)
  await orm.em.getConnection().execute('vacuum into ?', [database])
  await chmod(database, 0o600)
  await syncFile(database)
  const { sqlite, ledger, publicKeys, checkpoints, referenced } = await lookInto(database)
  const copy = await hashOfFile(database)
  // Listed after the copy was taken: a file is stored before anything names it, so none is missed.
  const stored = await listStored(files)
  const moved = await transferStored(files, join(aside, inBackup.files), [...new Set([...stored, ...referenced])])
  await writeFile(join(aside, inBackup.publicKeys), publicKeys.join(''), { mode: 0o600 })
  await writeFile(join(aside, inBackup.checkpoints), checkpoints.map((c) => checkpointLine({ ...c, type: CHECKPOINT_TYPE, at: new Date(c.at).toISOString() })).join(''), { mode: 0o600 })
  if (privateKey) await copyFile(privateKey, join(aside, inBackup.privateKey))
  if (sealKey) await copyFile(sealKey, join(aside, inBackup.sealKey))
  const record: BackupRecord = {
    form: 1, madeAt: now.toISOString(), occasion, tool: TOOL_VERSION,
    database: { sha256: copy!.sha256, bytes: copy!.bytes, sqlite },
    ledger,
    files: { sha256: moved.files, bytes: moved.bytes },
    trouble: moved.trouble,
    orphans: moved.files.filter((sha256) => !referenced.includes(sha256)),
    privateKey: Boolean(privateKey),
    sealKey: Boolean(sealKey),
  }
  await writeFile(join(aside, inBackup.record), `${JSON.stringify(record, null, 2)}\n`, { mode: 0o600 })
  for (const name of [inBackup.publicKeys, inBackup.checkpoints, inBackup.record, ...(privateKey ? [inBackup.privateKey] : []), ...(sealKey ? [inBackup.sealKey] : [])]) await syncFile(join(aside, name))
  await syncDirectory(aside)
  return record
}

/**
 * Makes a backup while the program runs: a copy of the database through its one connection, the stored files beside it, public keys and
 * checkpoints; everything synced and checked under a temporary name, then given its name in one step.
 *
 * The workplace's private key, the key of the sessions and that of the second factors are not in it unless asked for: whoever has a backup
 * reads everything and signs nothing.
 *
 * @throws DomainError wrong-state when one is being made already; verification-failed when the copy is not whole
 */
export async function makeBackup(source: BackupSource, wish: BackupWish): Promise<MadeBackup> {
  const { folder } = source
  if (underWay.has(folder)) throw new DomainError('wrong-state', 'A backup is being made right now. Nothing was done; look at the list when it is ready.')
  underWay.add(folder)
  const aside = join(folder, 'aside')
  try {
    await mkdir(folder, { recursive: true, mode: 0o700 })
    // what a stop in the middle of an earlier one left
    await rm(aside, { recursive: true, force: true })
    await mkdir(aside, { mode: 0o700 })
    const record = await write(source, aside, wish)
    const name = backupName(wish.now, await backupNames(folder))
    await rename(aside, join(folder, name))
    await syncDirectory(folder)
    return { name, record }
  } catch (error) {
    await rm(aside, { recursive: true, force: true })
    throw error
  } finally {
    underWay.delete(folder)
  }
}
