import { rename, rm } from 'node:fs/promises'
import { join } from 'node:path'
import { syncDirectory } from '../../db/file-store.ts'
import { listBackups } from './backup-record.ts'

/**
 * The oldest backups, past the `kept` that stay.
 *
 * Oldest by their ledger, not by their time: a backup made under a clock that went backwards is not taken for an old one. Backups that can't be
 * read are left where they are, for a person to look at.
 */
export async function pastKeeping(folder: string, kept: number, justMade: string): Promise<string[]> {
  const { backups } = await listBackups(folder)
  return backups.slice(kept).map((b) => b.name).filter((name) => name !== justMade)
}

/** Takes backups away; done after the ledger tells of it. */
export async function takeAwayBackups(folder: string, names: readonly string[]): Promise<void> {
  const going = join(folder, 'going')
  await rm(going, { recursive: true, force: true })
  for (const name of names) {
    // by another name first: a stop in the middle leaves nothing that looks like a backup
    await rename(join(folder, name), going)
    await syncDirectory(folder)
    await rm(going, { recursive: true, force: true })
  }
}
