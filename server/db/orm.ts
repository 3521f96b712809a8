import { existsSync } from 'node:fs'
import { MikroORM, type Options } from '@mikro-orm/sqlite'
import { Migrator } from '@mikro-orm/migrations'
import { entities } from './entities.ts'
import { ImmutabilityGuard } from './guards.ts'
import { ImmediateDialect } from './immediate-dialect.ts'
import { migrations } from './migrations/list.ts'

export type Orm = Awaited<ReturnType<typeof MikroORM.init>>

const options = (dbName: string): Options => ({
  dbName,
  entities,
  driverOptions: { client: ImmediateDialect as never },
  extensions: [Migrator],
  migrations: { migrationsList: migrations, snapshot: false, transactional: true, tableName: 'migration' },
  subscribers: [new ImmutabilityGuard()],
  forceUtcTimezone: true,
  logger: () => {},
  validateRequired: true,
  ignoreUndefinedInQuery: false,
})

/** A settled pragma: asked for, then read back. */
async function settle(orm: Orm, pragma: string, value: string | number, reads: string | number) {
  const connection = orm.em.getConnection()
  await connection.execute(`pragma ${pragma} = ${value}`)
  const [row] = (await connection.execute(`pragma ${pragma}`)) as Record<string, string | number>[]
  const got = row?.[pragma]
  if (got !== reads) throw new Error(`SQLite answers ${pragma} = ${String(got)}; Detent needs ${reads} and does not start without it.`)
}

/**
 * Opens the database: one connection, foreign keys on, every commit synced.
 *
 * @throws Error when a pragma does not take, so that the program never runs on weaker terms than it promises
 */
async function open(dbName: string, foreignKeys: boolean): Promise<Orm> {
  const orm = await MikroORM.init(options(dbName))
  await settle(orm, 'foreign_keys', foreignKeys ? 'on' : 'off', foreignKeys ? 1 : 0)
  if (dbName !== ':memory:') await settle(orm, 'journal_mode', 'wal', 'wal')
  await settle(orm, 'synchronous', 'full', 2)
  await settle(orm, 'trusted_schema', 'off', 0)
  return orm
}

/** Runs the migrations on a connection of its own: a rebuilt table must not cascade, so foreign keys are off until the end, then checked. */
async function migrate(dbName: string): Promise<void> {
  const orm = await open(dbName, false)
  try {
    await orm.getMigrator().up()
    const broken = (await orm.em.getConnection().execute('pragma foreign_key_check')) as unknown[]
    if (broken.length > 0) throw new Error(`After migrating, ${broken.length} rows refer to rows that are not there. Restore the backup made before this start.`)
  } finally {
    await orm.close(true)
  }
}

/** Opens the database file, brought to the present schema. `:memory:` makes a fresh one, for tests. */
export async function openDatabase(dbName: string): Promise<Orm> {
  if (dbName === ':memory:') {
    const orm = await open(dbName, true)
    await orm.getMigrator().up()
    return orm
  }
  if (!existsSync(dbName) || (await pendingMigrations(dbName))) await migrate(dbName)
  return open(dbName, true)
}

async function pendingMigrations(dbName: string): Promise<boolean> {
  const orm = await open(dbName, true)
  try {
    return (await orm.getMigrator().getPendingMigrations()).length > 0
  } finally {
    await orm.close(true)
  }
}
