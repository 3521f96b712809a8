import { join } from 'node:path'
import type { SqlEntityManager } from '@mikro-orm/sqlite'
import { describe, expect, it } from 'vitest'
import { DatabaseInUse } from '../../server/db/only-process.ts'
import { openDatabase, type Orm } from '../../server/db/orm.ts'
import { assertTerms } from '../../server/db/terms.ts'
import { aFolder } from './a-folder.ts'

const sql = <T = Record<string, unknown>>(orm: Orm, text: string) => orm.em.getConnection().execute(text) as Promise<T[]>

interface Pooled {
  client: { acquireConnection(): Promise<{ __knex__disposed?: Error }>; releaseConnection(c: unknown): Promise<void> }
}

describe('opening a database file', () => {
  it('holds the terms, also on a connection that replaced a broken one', async () => {
    const file = join(aFolder(), 'detent.sqlite')
    const orm = await openDatabase(file)
    try {
      const terms = { connections: 1, lockingMode: 'exclusive', journalMode: 'wal', foreignKeys: true, synchronous: 2 }
      expect(await assertTerms(orm, file)).toMatchObject(terms)
      const { client } = (orm.em.getConnection() as unknown as { getKnex(): Pooled }).getKnex()
      const first = await client.acquireConnection()
      first.__knex__disposed = new Error('broken')
      await client.releaseConnection(first)
      expect(await assertTerms(orm, file)).toMatchObject(terms)
      const second = await client.acquireConnection()
      expect(second).not.toBe(first)
      await client.releaseConnection(second)
    } finally {
      await orm.close(true)
    }
  })

  it('refuses a second opener for as long as the first has it', async () => {
    const file = join(aFolder(), 'detent.sqlite')
    const orm = await openDatabase(file)
    await expect(openDatabase(file)).rejects.toThrow(DatabaseInUse)
    await sql(orm, "insert into firmware_line (key, name, description, created_at) values ('hinge', 'Hinge', '', 0)")
    await orm.close(true)
    const again = await openDatabase(file)
    expect(await sql(again, 'select key from firmware_line')).toEqual([{ key: 'hinge' }])
    await again.close(true)
  })

  it('refuses a term that did not take', async () => {
    const orm = await openDatabase(':memory:')
    await sql(orm, 'pragma synchronous = normal')
    await expect(assertTerms(orm, ':memory:')).rejects.toThrow('synchronous = 1; Detent needs 2')
    await orm.close(true)
  })
})

describe('a COMMIT that fails', () => {
  it('ends its transaction: the next ones work, and what they write stays', async () => {
    const file = join(aFolder(), 'detent.sqlite')
    const orm = await openDatabase(file)
    const line = (key: string) => `insert into firmware_line (key, name, description, created_at) values ('${key}', 'Line', '', 0)`
    const inTransaction = (work: (em: SqlEntityManager) => Promise<unknown>) => orm.em.fork().transactional((em) => work(em as SqlEntityManager))
    const failing = inTransaction(async (em) => {
      await em.execute('pragma defer_foreign_keys = on')
      await em.execute(line('lost'))
      await em.execute("insert into role_grant (person_id, role, granted_at) values (77, 'observer', 0)")
    })
    // one waits for the connection while the other fails
    const waiting = inTransaction((em) => em.execute(line('waiting')))
    await expect(failing).rejects.toThrow('SQLITE_CONSTRAINT: FOREIGN KEY')
    await waiting
    await sql(orm, line('plain'))
    await inTransaction((em) => em.execute(line('after')))
    await orm.close(true)
    const again = await openDatabase(file)
    expect(await sql(again, 'select key from firmware_line order by id')).toEqual([{ key: 'waiting' }, { key: 'plain' }, { key: 'after' }])
    await again.close(true)
  })
})
