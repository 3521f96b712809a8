import { MikroORM, type Options, type Transaction } from '@mikro-orm/sqlite'
import type { MigrationObject } from '@mikro-orm/core'
import { Migrator } from '@mikro-orm/migrations'
import { entities } from './entities.ts'
import { ImmutabilityGuard } from './guards.ts'
import { ImmediateDialect } from './immediate-dialect.ts'
import { migrations as ownMigrations } from './migrations/list.ts'
import { DatabaseInUse } from './only-process.ts'
import { sqliteCodeOf } from './storage-errors.ts'
import { assertTerms, pragmasOf } from './terms.ts'

export type Orm = Awaited<ReturnType<typeof MikroORM.init>>

export interface OpenOptions {
  /** done on the open database before its schema is altered; not for a new one */
  beforeMigrating?: (orm: Orm, pending: readonly string[]) => Promise<void>
  /** the migrations to bring it to; tests give longer lists */
  migrations?: readonly MigrationObject[]
}

interface RawConnection {
  exec(sql: string, done: (error: Error | null) => void): void
}

const options = (dbName: string, migrations: readonly MigrationObject[]): Options => ({
  dbName,
  entities,
  driverOptions: { client: ImmediateDialect as never },
  pool: { min: 1, max: 1, afterCreate: ((connection: RawConnection, done: (error: Error | null, connection: RawConnection) => void) => connection.exec(pragmasOf(dbName), (error) => done(error, connection))) as never },
  extensions: [Migrator],
  migrations: { migrationsList: [...migrations], snapshot: false, transactional: true, tableName: 'migration' },
  subscribers: [new ImmutabilityGuard()],
  forceUtcTimezone: true,
  logger: () => {},
  validateRequired: true,
  ignoreUndefinedInQuery: false,
})

async function open(dbName: string, migrations: readonly MigrationObject[]): Promise<Orm> {
  let orm: Orm | undefined
  try {
    orm = await MikroORM.init(options(dbName, migrations))
    await assertTerms(orm, dbName)
    return orm
  } catch (error) {
    await orm?.close(true)
    if (sqliteCodeOf(error) === 'SQLITE_BUSY') throw new DatabaseInUse(dbName)
    throw error
  }
}

/** The part of the migrator that runs inside its one transaction. */
interface RunsInTransaction {
  runInTransaction(transaction: Transaction, ...rest: unknown[]): Promise<unknown>
}

/**
 * Runs what is pending in one transaction: all of it, or nothing.
 *
 * Foreign keys are off meanwhile, because a rebuilt table would cascade, and that can't be switched inside a transaction; they are
 * checked before it is committed. Nobody else uses the connection yet.
 */
async function migrate(orm: Orm): Promise<void> {
  const connection = orm.em.getConnection()
  const migrator = orm.getMigrator()
  const inside = migrator as unknown as RunsInTransaction
  const run = inside.runInTransaction.bind(migrator)
  inside.runInTransaction = async (transaction, ...rest) => {
    const done = await run(transaction, ...rest)
    const broken = (await connection.execute('pragma foreign_key_check', [], 'all', transaction)) as unknown[]
    if (broken.length > 0) throw new Error(`After migrating, ${broken.length} rows would refer to rows that are not there. Nothing was migrated; the database is as it was.`)
    return done
  }
  await connection.execute('pragma foreign_keys = off')
  try {
    await migrator.up()
  } finally {
    inside.runInTransaction = run
    await connection.execute('pragma foreign_keys = on')
  }
}

/**
 * Opens the database file, brought to the present schema: one connection, one process, foreign keys on, every commit synced.
 * `:memory:` makes a fresh one, for tests.
 *
 * @throws DatabaseInUse when another process has it open
 * @throws Error when a term does not take, or a migration fails; the database is as it was then
 */
export async function openDatabase(dbName: string, { beforeMigrating, migrations = ownMigrations }: OpenOptions = {}): Promise<Orm> {
  const orm = await open(dbName, migrations)
  try {
    const pending = (await orm.getMigrator().getPendingMigrations()).map((m) => m.name)
    if (pending.length > 0) {
      const isNew = (await orm.getMigrator().getExecutedMigrations()).length === 0
      if (!isNew) await beforeMigrating?.(orm, pending)
      await migrate(orm)
      await assertTerms(orm, dbName)
    }
    return orm
  } catch (error) {
    await orm.close(true)
    throw error
  }
}
