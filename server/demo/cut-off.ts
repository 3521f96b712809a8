import { existsSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'

const markOf = (dataDir: string) => join(dataDir, 'demo-unfinished')

/**
 * Makes the demo under a mark that stays when the process is ended meanwhile. Its database is made anew then, so that it need not reach the disk
 * act by act, but once at the end.
 *
 * @param ask  runs a statement on the database's connection
 * @param make  tells the story in an empty database
 */
export async function underMark(dataDir: string, ask: (sql: string) => Promise<unknown>, make: () => Promise<void>): Promise<void> {
  writeFileSync(markOf(dataDir), 'The demo workplace is being made here.\n', { mode: 0o600 })
  await ask('pragma synchronous = off')
  await make()
  await ask('pragma synchronous = full')
  await ask('pragma wal_checkpoint(truncate)')
  rmSync(markOf(dataDir))
}

/** Takes away what a demo left that was never finished: nobody has worked in it, for the server had not begun to serve. */
export function clearCutOff(dataDir: string, { database, files }: { database: string; files: string }): void {
  if (!existsSync(markOf(dataDir))) return
  for (const file of [database, `${database}-wal`, `${database}-shm`, files]) rmSync(file, { recursive: true, force: true })
  rmSync(markOf(dataDir))
}
