import { MikroORM } from '@mikro-orm/sqlite'
import { DatabaseInUse } from './only-process.ts'
import type { AskCopy } from './read-copy.ts'
import { sqliteCodeOf } from './storage-errors.ts'

/**
 * Brings a database file that nobody serves to rest: what its write-ahead log holds goes into the file, and the log is gone after.
 *
 * @param look  reads from it meanwhile
 * @returns what `look` found; null when the file can't be read as a database, and then it is as it was
 * @throws DatabaseInUse when another process has it open
 */
export async function settleFile<T>(file: string, look: (ask: AskCopy) => Promise<T>): Promise<T | null> {
  let orm: MikroORM | undefined
  try {
    orm = (await MikroORM.init({ dbName: file, entities: [], discovery: { warnWhenNoEntities: false }, logger: () => {} })) as unknown as MikroORM
    const ask = ((sql: string) => (orm as MikroORM).em.getConnection().execute(sql)) as AskCopy
    await ask('pragma locking_mode = exclusive')
    await ask('begin exclusive')
    await ask('commit')
    const found = await look(ask)
    await ask('pragma wal_checkpoint(truncate)')
    return found
  } catch (error) {
    if (sqliteCodeOf(error) === 'SQLITE_BUSY') throw new DatabaseInUse(file)
    return null
  } finally {
    await orm?.close(true)
  }
}
