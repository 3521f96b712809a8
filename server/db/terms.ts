/** On what terms the database is open, as SQLite itself answers. */
export interface DatabaseTerms {
  sqlite: string
  connections: number
  lockingMode: string
  journalMode: string
  foreignKeys: boolean
  /** 2: every commit is synced before it counts */
  synchronous: number
}

/** The oldest SQLite that this was tested with. */
const oldest = [3, 44, 0]

/** Sent on each new connection, before anything else: a pragma holds for its connection only. */
export const pragmasOf = (dbName: string): string =>
  [
    // The lock that a second process meets, held by the operating system and gone with this one, however it ends.
    ...(dbName === ':memory:' ? [] : ['pragma locking_mode = exclusive', 'pragma journal_mode = wal']),
    'pragma foreign_keys = on',
    'pragma synchronous = full',
    'pragma trusted_schema = off',
  ].join(';')

const older = (version: string): boolean => {
  const parts = version.split('.').map(Number)
  const at = oldest.findIndex((least, i) => parts[i] !== least)
  return at >= 0 && parts[at] < oldest[at]
}

/**
 * Reads the terms back and compares them with what Detent promises.
 *
 * @throws Error naming the term that did not take, so that the program never runs on weaker ones
 */
export async function assertTerms(orm: { em: { getConnection(): unknown } }, dbName: string): Promise<DatabaseTerms> {
  const connection = orm.em.getConnection() as { execute(sql: string): Promise<Record<string, string | number>[]>; getKnex(): { client: { pool: { max: number } } } }
  const ask = async (sql: string) => Object.values((await connection.execute(sql))[0] ?? {})[0]
  const must = (name: string, got: string | number, wanted: string | number) => {
    if (got !== wanted) throw new Error(`SQLite answers ${name} = ${got}; Detent needs ${wanted} and does not start without it.`)
  }
  const terms: DatabaseTerms = {
    sqlite: String(await ask('select sqlite_version()')),
    connections: connection.getKnex().client.pool.max,
    lockingMode: String(await ask('pragma locking_mode')),
    journalMode: String(await ask('pragma journal_mode')),
    foreignKeys: (await ask('pragma foreign_keys')) === 1,
    synchronous: Number(await ask('pragma synchronous')),
  }
  if (older(terms.sqlite)) throw new Error(`SQLite is ${terms.sqlite}; Detent needs ${oldest.join('.')} or newer.`)
  must('connections', terms.connections, 1)
  must('foreign_keys', Number(terms.foreignKeys), 1)
  must('synchronous', terms.synchronous, 2)
  must('trusted_schema', Number(await ask('pragma trusted_schema')), 0)
  if (dbName !== ':memory:') {
    must('locking_mode', terms.lockingMode, 'exclusive')
    must('journal_mode', terms.journalMode, 'wal')
  }
  return terms
}
