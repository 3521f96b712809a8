import { existsSync } from 'node:fs'
import { chmod, copyFile, mkdir, rename, rm } from 'node:fs/promises'
import { basename, join } from 'node:path'
import type { Config } from '../../config.ts'
import { syncDirectory } from '../../db/file-store.ts'
import { openDatabase } from '../../db/orm.ts'
import { readCopy } from '../../db/read-copy.ts'
import { settleFile } from '../../db/settle-file.ts'
import { putAlso, syncFile, transferStored } from '../../db/stored-files.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { Link } from '../people/link.entity.ts'
import { SessionRecord } from '../people/session.entity.ts'
import { inBackup } from './backup-record.ts'
import { placesOf } from './open-workplace.ts'
import { proveBackup, type BackupProof } from './prove-backup.ts'

export interface Restored {
  proof: BackupProof
  /** folder that keeps the database that was replaced; null when there was none */
  keptAside: string | null
  /** end of the ledger that was replaced; null when there was none, or it could not be read */
  replaced: LedgerEnd | null
  /** the private key was taken from the backup, because none was there */
  privateKeyTaken: boolean
  /** people of the restored database have second factors, and no key is there that opens them */
  sealKeyMissing: boolean
}

interface LedgerEnd {
  entries: number
  lastHash: string
}

/** Keeps the present database aside, its log with it where it could not be settled. */
async function keepAside(database: string, dataDir: string, now: Date): Promise<string> {
  const stamp = `replaced-${now.toISOString().slice(0, 19).replaceAll(':', '-')}Z`
  let folder = join(dataDir, stamp)
  for (let n = 2; existsSync(folder); n += 1) folder = join(dataDir, `${stamp}-${n}`)
  await mkdir(folder, { mode: 0o700 })
  for (const file of [database, `${database}-wal`, `${database}-shm`]) if (existsSync(file)) await putAlso(file, join(folder, basename(file)))
  await syncDirectory(folder)
  await syncDirectory(dataDir)
  return folder
}

interface Marking {
  backup: string
  proof: BackupProof
  replaced: LedgerEnd | null
  keptAside: string | null
  now: Date
}

/** Tells the restored ledger what happened; sessions and links of then are ended, because they may have been ended since. */
async function mark(database: string, { backup, proof, replaced, keptAside, now }: Marking) {
  const orm = await openDatabase(database)
  try {
    await orm.em.fork().transactional(async (em) => {
      await em.nativeDelete(SessionRecord, {})
      await em.nativeUpdate(Link, { usedAt: null, expiresAt: { $gt: now } }, { expiresAt: now })
      await appendEntry(em, { at: now, person: null, act: 'backup restored', details: { name: basename(backup), madeAt: proof.record.madeAt, sha256: proof.record.database.sha256, entries: proof.entries, replaced, keptAside: keptAside && basename(keptAside) } })
    })
  } finally {
    await orm.close(true)
  }
  await syncFile(database)
}

/** Takes a key's file along where none is. @returns whether it did */
async function takeKey(from: string, to: string): Promise<boolean> {
  if (existsSync(to)) return false
  await copyFile(from, to)
  await chmod(to, 0o600)
  await syncFile(to)
  return true
}

/**
 * Puts a backup in the place of the workplace's database, after it is proven. Nobody may serve the database meanwhile.
 *
 * Stored files are added to the store, none is taken out of it. The database that was there is kept aside before the new one takes its name in one
 * step: a stop at any point leaves the old one or the new one.
 *
 * @throws BackupRefused when the backup does not hold; DatabaseInUse. Nothing is replaced then
 */
export async function restoreBackup(config: Pick<Config, 'dataDir'>, backup: string, now: Date): Promise<Restored> {
  const { dataDir } = config
  const { database, files, privateKey, sealKey } = placesOf(config)
  await mkdir(dataDir, { recursive: true, mode: 0o700 })
  const work = join(dataDir, 'restoring')
  const proof = await proveBackup(backup, work)
  try {
    const copy = join(work, inBackup.database)
    const ends = existsSync(database) ? await settleFile(database, (ask) => ask<LedgerEnd>('select sequence as entries, hash as lastHash from ledger_entry order by sequence desc limit 1')) : null
    const replaced = ends?.[0] ?? null
    const keptAside = existsSync(database) ? await keepAside(database, dataDir, now) : null
    await mark(copy, { backup, proof, replaced, keptAside, now })
    await transferStored(join(work, inBackup.files), files, proof.record.files.sha256)
    const privateKeyTaken = proof.record.privateKey && (await takeKey(join(backup, inBackup.privateKey), privateKey))
    if (proof.record.sealKey) await takeKey(join(backup, inBackup.sealKey), sealKey)
    const sealed = await readCopy(copy, (ask) => ask<{ n: number }>('select count(*) as n from person where second_factor is not null'))
    // A log left beside would be played into the new database.
    for (const left of [`${database}-wal`, `${database}-shm`]) await rm(left, { force: true })
    await rename(copy, database)
    await syncDirectory(dataDir)
    return { proof, keptAside, replaced, privateKeyTaken, sealKeyMissing: sealed[0].n > 0 && !existsSync(sealKey) }
  } finally {
    await rm(work, { recursive: true, force: true })
  }
}
