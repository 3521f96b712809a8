import { join } from 'node:path'
import { Migration } from '@mikro-orm/migrations'
import { expect, it } from 'vitest'
import { migrations } from '../../server/db/migrations/list.ts'
import { openDatabase, type Orm } from '../../server/db/orm.ts'
import { aFolder } from './a-folder.ts'

const sql = (orm: Orm, text: string) => orm.em.getConnection().execute(text) as Promise<Record<string, unknown>[]>

/** Rebuilds the parent table of role grants, the way a generated migration does. */
class Rebuild extends Migration {
  override up(): void {
    this.addSql('create table person_new as select * from person')
    this.addSql('drop table person')
    this.addSql('alter table person_new rename to person')
    this.addSql('create unique index person_new_id on person (id)')
  }
}

class Adds extends Migration {
  override up(): void {
    this.addSql('create table noted (id integer primary key)')
  }
}

class Fails extends Migration {
  override up(): void {
    this.addSql('insert into not_there values (1)')
  }
}

class Orphans extends Migration {
  override up(): void {
    this.addSql('delete from person')
  }
}

async function filled(): Promise<string> {
  const file = join(aFolder(), 'detent.sqlite')
  const orm = await openDatabase(file)
  await sql(orm, "insert into person (id, name, email, created_at) values (7, 'Ada', 'ada@dunlin.example', 0)")
  await sql(orm, "insert into role_grant (person_id, role, granted_at) values (7, 'observer', 0)")
  await orm.close(true)
  return file
}

const tables = async (file: string) => {
  const orm = await openDatabase(file)
  try {
    return { noted: (await sql(orm, "select name from sqlite_master where name = 'noted'")).length, grants: (await sql(orm, 'select person_id from role_grant')).length, keys: (await sql(orm, 'pragma foreign_keys'))[0].foreign_keys }
  } finally {
    await orm.close(true)
  }
}

const withMore = (...more: { name: string; class: new (...args: never[]) => Migration }[]) => [...migrations, ...more] as typeof migrations

it('keeps the rows that refer to a rebuilt table, and has foreign keys on again after', async () => {
  const file = await filled()
  const orm = await openDatabase(file, { migrations: withMore({ name: '99-rebuild', class: Rebuild }) })
  expect(await sql(orm, 'select person_id from role_grant')).toEqual([{ person_id: 7 }])
  expect(await sql(orm, 'pragma foreign_keys')).toEqual([{ foreign_keys: 1 }])
  await orm.close(true)
})

it.each([
  ['fails', Fails, 'no such table: not_there'],
  ['would leave rows that refer to nothing', Orphans, '1 rows would refer to rows that are not there'],
])('leaves everything as it was when the second of two %s', async (_what, second, message) => {
  const file = await filled()
  await expect(openDatabase(file, { migrations: withMore({ name: '98-adds', class: Adds }, { name: '99-second', class: second }) })).rejects.toThrow(message)
  expect(await tables(file)).toEqual({ noted: 0, grants: 1, keys: 1 })
})

it('lets a backup be made first, of a database that was there only', async () => {
  const told: string[][] = []
  const beforeMigrating = async (orm: Orm, pending: readonly string[]) => {
    expect(await sql(orm, "select name from sqlite_master where name = 'noted'")).toEqual([])
    told.push([...pending])
  }
  const fresh = await openDatabase(join(aFolder(), 'detent.sqlite'), { beforeMigrating })
  await fresh.close(true)
  expect(told).toEqual([])
  const file = await filled()
  const orm = await openDatabase(file, { beforeMigrating, migrations: withMore({ name: '99-adds', class: Adds }) })
  await orm.close(true)
  expect(told).toEqual([['99-adds']])
  const failing = openDatabase(file, { beforeMigrating: async () => Promise.reject(new Error('no room for a backup')), migrations: withMore({ name: '99-adds', class: Adds }, { name: '99-more', class: Orphans }) })
  await expect(failing).rejects.toThrow('no room for a backup')
})
