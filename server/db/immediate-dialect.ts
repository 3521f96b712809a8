import { SqliteKnexDialect } from '@mikro-orm/knex'

interface Transaction {
  begin: (connection: unknown) => Promise<unknown>
  query: (connection: unknown, sql: string) => Promise<unknown>
}

/**
 * SQLite whose transactions take the write lock at once (BEGIN IMMEDIATE).
 *
 * A deferred transaction that reads first and writes later can be refused in the middle; one that begins as a
 * writer waits at its beginning, before any work is done.
 */
export class ImmediateDialect extends (SqliteKnexDialect as unknown as new (...args: unknown[]) => { transaction(...args: unknown[]): Transaction }) {
  override transaction(...args: unknown[]): Transaction {
    const transaction = super.transaction(...args)
    transaction.begin = function begin(this: Transaction, connection) {
      return this.query(connection, 'BEGIN IMMEDIATE;')
    }
    return transaction
  }
}
