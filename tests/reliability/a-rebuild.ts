import { join } from 'node:path'
import { Migration } from '@mikro-orm/migrations'
import { migrations } from '../../server/db/migrations/list.ts'
import { openDatabase, type OpenOptions } from '../../server/db/orm.ts'
import { faultsOf } from '../../server/db/read-copy.ts'
import { settleFile } from '../../server/db/settle-file.ts'

/** Rebuilds a table that others refer to, as generated migrations do: copied aside, dropped, renamed; where it stops half-way, rows are gone. */
class Rebuild extends Migration {
  override up(): void {
    this.addSql('create table `person_new` as select *, 1 as `rebuilt` from `person`')
    this.addSql('drop table `person`')
    this.addSql('alter table `person_new` rename to `person`')
    this.addSql('create unique index `person_new_id` on `person` (`id`)')
    this.addSql('create unique index `person_new_email` on `person` (`email`)')
    this.addSql('update `role_grant` set `role` = upper(`role`)')
  }
}

export const withRebuild: OpenOptions = { migrations: [...migrations, { name: '99991231235959-rebuild', class: Rebuild }] as typeof migrations }

export const filledWith = 400

/** A database with people and their roles, to be migrated. */
export async function filling(folder: string): Promise<void> {
  const orm = await openDatabase(join(folder, 'detent.sqlite'))
  try {
    const run = (sql: string) => orm.em.getConnection().execute(sql)
    await run(`with recursive n(i) as (select 1 union all select i + 1 from n where i < ${filledWith}) insert into person (id, name, email, created_at) select i, 'Person ' || i, i || '@dunlin.example', 0 from n`)
    await run("insert into role_grant (person_id, role, granted_at) select id, 'observer', 0 from person")
  } finally {
    await orm.close(true)
  }
}

/** How far a rebuild got in a file, read as the file is: what SQLite's own recovery leaves of a killed process. */
export async function look(folder: string) {
  return settleFile(join(folder, 'detent.sqlite'), async (ask) => {
    const count = async (from: string) => (await ask<{ n: number }>(`select count(*) as n from ${from}`))[0].n
    return {
      faults: await faultsOf(ask),
      people: await count('person'),
      grants: await count('role_grant'),
      upper: await count("role_grant where role = 'OBSERVER'"),
      rebuilt: (await ask("select 1 from pragma_table_info('person') where name = 'rebuilt'")).length > 0,
    }
  })
}
