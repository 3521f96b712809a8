import { join } from 'node:path'
import type { Config } from '../../config.ts'
import { openDatabase, type Orm } from '../../db/orm.ts'
import { sealKeyName } from '../people/second-factor/open-seals.ts'
import { makeBackup } from './make-backup.ts'

/** Where the parts of a workplace lie in its data folder. */
export const placesOf = ({ dataDir }: Pick<Config, 'dataDir'>) => ({ database: join(dataDir, 'detent.sqlite'), files: join(dataDir, 'files'), privateKey: join(dataDir, 'workplace.key'), sealKey: join(dataDir, sealKeyName) })

/**
 * Opens the workplace's database. Before its schema is altered, a backup of it is made.
 *
 * @throws Error when that backup can't be made: the database is as it was then
 */
export function openWorkplaceDatabase(config: Pick<Config, 'dataDir' | 'backupDir'>, now: () => Date = () => new Date()): Promise<Orm> {
  const { database, files } = placesOf(config)
  return openDatabase(database, {
    async beforeMigrating(orm) {
      try {
        await makeBackup({ orm, files, folder: config.backupDir }, { now: now(), occasion: 'before migrating' })
      } catch (error) {
        throw new Error(`This version of Detent alters the database's schema, and the backup before that could not be made: ${(error as Error).message} The database is as it was; make room in ${config.backupDir}, or set DETENT_BACKUPS to another folder, and start again.`, { cause: error })
      }
    },
  })
}
