import { readFile, readdir } from 'node:fs/promises'
import { join } from 'node:path'
import { backupOccasions, type BackupOccasion, type BackupTrouble, type BackupView } from '../../../shared/contract/backups.ts'

/** The files of a backup's folder. */
export const inBackup = {
  database: 'detent.sqlite',
  files: 'files',
  record: 'backup.json',
  publicKeys: 'public-keys.pem',
  checkpoints: 'checkpoints.jsonl',
  privateKey: 'workplace.key',
  sealKey: 'second-factor.key',
} as const

/** What a backup's folder says of itself, in backup.json. */
export interface BackupRecord {
  form: 1
  madeAt: string
  occasion: BackupOccasion
  /** version of Detent that made it */
  tool: string
  database: { sha256: string; bytes: number; sqlite: string }
  ledger: { entries: number; lastHash: string } | null
  files: { sha256: string[]; bytes: number }
  trouble: BackupTrouble[]
  orphans: string[]
  privateKey: boolean
  /** the key that opens second factors is in it too; left out by backups made before there were any */
  sealKey?: boolean
}

/** A name that sorts by time: 2026-12-01T02-00-00Z, and -2 and so on for more of one second. */
export const backupName = (madeAt: Date, taken: readonly string[]): string => {
  const base = `${madeAt.toISOString().slice(0, 19).replaceAll(':', '-')}Z`
  for (let n = 1; ; n += 1) {
    const name = n === 1 ? base : `${base}-${n}`
    if (!taken.includes(name)) return name
  }
}

const isName = (name: string) => /^\d{4}-\d{2}-\d{2}T\d{2}-\d{2}-\d{2}Z(-\d+)?$/.test(name)

/** Names of the finished backups in a folder; one that was left half made has no such name. */
export async function backupNames(folder: string): Promise<string[]> {
  const names = await readdir(folder).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT' || error.code === 'ENOTDIR') return []
    throw error
  })
  return names.filter(isName)
}

const isHash = (v: unknown) => typeof v === 'string' && /^[0-9a-f]{64}$/.test(v)

/** @throws Error when backup.json is missing or is none */
export async function readRecord(backup: string): Promise<BackupRecord> {
  const file = join(backup, inBackup.record)
  let record: BackupRecord
  try {
    record = JSON.parse(await readFile(file, 'utf8')) as BackupRecord
  } catch (error) {
    throw new Error(`${file} can't be read (${(error as Error).message}): this folder is no finished backup of Detent.`)
  }
  const fits = record?.form === 1 && backupOccasions.includes(record.occasion) && isHash(record.database?.sha256) && Array.isArray(record.files?.sha256) && record.files.sha256.every(isHash) && !Number.isNaN(Date.parse(record.madeAt))
  if (!fits) throw new Error(`${file} is no record of a backup, or of a later form than this Detent reads. Nothing was done with it.`)
  return record
}

export const presentBackup = (name: string, record: BackupRecord): BackupView => ({
  name,
  madeAt: record.madeAt,
  occasion: record.occasion,
  bytes: record.database.bytes,
  sha256: record.database.sha256,
  files: record.files.sha256.length,
  fileBytes: record.files.bytes,
  ledger: record.ledger,
  trouble: record.trouble,
  orphans: record.orphans.length,
  privateKey: record.privateKey,
})

export interface BackupList {
  backups: BackupView[]
  unreadable: number
}

/** Finished backups, the one with the longest ledger first: a clock may have gone backwards, a ledger does not. */
export async function listBackups(folder: string): Promise<BackupList> {
  const names = await backupNames(folder)
  const read = await Promise.all(names.map((name) => readRecord(join(folder, name)).then((record) => presentBackup(name, record), () => null)))
  const backups = read.filter((b) => b !== null)
  backups.sort((a, b) => (b.ledger?.entries ?? 0) - (a.ledger?.entries ?? 0) || (a.madeAt < b.madeAt ? 1 : -1))
  return { backups, unreadable: names.length - backups.length }
}
