import { MikroORM } from '@mikro-orm/sqlite'
import { Migrator } from '@mikro-orm/migrations'
import { entities } from './entities.ts'

/**
 * Writes the next migration from the entities: `npm run migration -- NAME`, then add its class to migrations/list.ts.
 * The snapshot beside the migrations says what the last one left behind.
 */
const name = process.argv[2]
if (!name || !/^[a-z0-9-]+$/.test(name)) throw new Error('Name the migration: npm run migration -- what-it-does (lower-case letters, digits, hyphens)')
const orm = await MikroORM.init({
  dbName: ':memory:',
  entities,
  extensions: [Migrator],
  migrations: { path: 'server/db/migrations', snapshot: true, snapshotName: 'snapshot', emit: 'ts', fileName: (timestamp: string) => `${timestamp}-${name}` },
})
const made = await orm.getMigrator().createMigration()
console.error(made.diff.up.length === 0 ? 'Nothing to migrate: the entities match the snapshot.' : `Wrote ${made.fileName}`)
await orm.close(true)
