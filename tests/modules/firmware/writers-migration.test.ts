import { MikroORM } from '@mikro-orm/sqlite'
import { Migrator } from '@mikro-orm/migrations'
import { expect, it } from 'vitest'
import { entities } from '../../../server/db/entities.ts'
import { migrations } from '../../../server/db/migrations/list.ts'

it('gives versions that are there already their uploader as the writer', async () => {
  const orm = await MikroORM.init({ dbName: ':memory:', entities, extensions: [Migrator], migrations: { migrationsList: migrations, snapshot: false, tableName: 'migration' }, logger: () => {} })
  try {
    const before = migrations[migrations.findIndex((m) => m.name.endsWith('firmware-writers')) - 1]
    await orm.getMigrator().up({ to: before.name })
    const sql = (text: string) => orm.em.getConnection().execute(text)
    await sql("insert into person (id, name, email, created_at) values (7, 'Writer', 'writer@dunlin.example', 0)")
    await sql("insert into firmware_line (id, key, name, description, created_at) values (1, 'hinge', 'Hinge', '', 0)")
    await sql("insert into firmware_version (line_id, version, state, schema_text, schema_hash, notes, uploaded_by_id, created_at) values (1, '1.0.0', 'draft', '{}', '', '', 7, 0)")
    await orm.getMigrator().up()
    expect(await sql('select version, writers from firmware_version')).toEqual([{ version: '1.0.0', writers: '[7]' }])
    expect(await sql('pragma foreign_key_check')).toEqual([])
  } finally {
    await orm.close(true)
  }
})
