import { pathToFileURL } from 'node:url'
import { MikroORM } from '@mikro-orm/sqlite'

export type AskCopy = <T = Record<string, unknown>>(sql: string) => Promise<T[]>

/**
 * Reads a database file that nobody serves: a copy, on a connection of its own that cannot write.
 *
 * Never for the live file: a second connection to it is what the rest of the program rules out.
 */
export async function readCopy<T>(file: string, work: (ask: AskCopy) => Promise<T>): Promise<T> {
  const orm = await MikroORM.init({
    dbName: file,
    entities: [],
    discovery: { warnWhenNoEntities: false },
    driverOptions: { connection: { filename: `${pathToFileURL(file).href}?mode=ro`, flags: ['OPEN_URI'] } },
    logger: () => {},
  })
  try {
    return await work((sql) => orm.em.getConnection().execute(sql))
  } finally {
    await orm.close(true)
  }
}

/** What SQLite finds wrong with a file; empty when it is whole. */
export async function faultsOf(ask: AskCopy): Promise<string[]> {
  const integrity = (await ask<{ integrity_check: string }>('pragma integrity_check(20)')).map((row) => row.integrity_check).filter((text) => text !== 'ok')
  const broken = await ask<{ table: string }>('pragma foreign_key_check')
  return [...integrity, ...(broken.length > 0 ? [`${broken.length} rows refer to rows that are not there, first in ${broken[0].table}`] : [])]
}
