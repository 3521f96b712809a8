import type { Allowed } from './people.ts'

/** Why a backup was made: at its hour, because an administrator asked, by the command line, or before the schema was altered. */
export const backupOccasions = ['daily', 'asked', 'command', 'before migrating'] as const
export type BackupOccasion = (typeof backupOccasions)[number]

/** A stored file that could not be taken along as it should be. */
export interface BackupTrouble {
  /** the file's name in the store */
  sha256: string
  what: 'missing' | 'altered'
}

export interface BackupView {
  name: string
  madeAt: string
  occasion: BackupOccasion
  /** of the database's copy */
  bytes: number
  sha256: string
  /** stored files beside it */
  files: number
  fileBytes: number
  /** entries of the ledger in it, and the last one's hash; null for a database that has none yet */
  ledger: { entries: number; lastHash: string } | null
  /** files that the database names and the store had not, or not unaltered */
  trouble: BackupTrouble[]
  /** stored files that nothing in the database names */
  orphans: number
  /** holds the workplace's private key */
  privateKey: boolean
}

export interface BackupsPage {
  /** newest first; unreadable ones are left out and counted */
  backups: BackupView[]
  unreadable: number
  /** where they lie, on the server */
  folder: string
  /** how many are kept */
  kept: number
  /** hour of the server's clock, 0 to 23; null: no daily backup */
  hour: number | null
  /** the last one that failed, when none has been made since */
  failed: { at: string; why: string } | null
  may: { make: Allowed }
}
