import type { FileStore } from '../../db/file-store.ts'
import type { Orm } from '../../db/orm.ts'
import { backupUnderWay } from '../backups/make-backup.ts'
import { referencedFiles } from '../backups/referenced-files.ts'

/**
 * Takes the file of a firmware image away that was replaced, or whose attaching was refused, once nothing names it. While a backup is being
 * made it stays: the backup's copy of the database may name it still. What stays is told of as an orphan by the next backup.
 *
 * Called after the transaction that let go of it, so that whatever names it can be seen.
 */
export async function dropFirmwareFile({ orm, files }: { orm: Orm; files: FileStore }, sha256: string): Promise<void> {
  const named = await referencedFiles((sql) => orm.em.fork().getConnection().execute(sql))
  if (named.includes(sha256) || backupUnderWay()) return
  // the act is done: a file that cannot be taken away is no reason to tell its caller that it failed
  await files.remove(sha256).catch(() => false)
}
