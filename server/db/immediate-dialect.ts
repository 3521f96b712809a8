import { SqliteKnexDialect } from '@mikro-orm/knex'

interface Client {
  query: (connection: Connection, sql: string) => Promise<unknown>
}

interface Connection {
  /** read by the pool: a connection that bears an error is closed and replaced */
  __knex__disposed?: Error
}

/** What of knex's transaction is used and replaced here. */
interface Transaction {
  begin: (connection: Connection) => Promise<unknown>
  commit: (connection: Connection, value: unknown) => Promise<unknown>
  query: (connection: Connection, sql: string) => Promise<unknown>
  trxClient: Client
  _completed: boolean
  _resolver: (value: unknown) => void
  _rejecter: (error: unknown) => void
}

const nothingToRollBack = (error: unknown) => error instanceof Error && error.message.includes('no transaction is active')

/** Ends what a failed COMMIT left open; a connection on which that fails too is given up. */
async function leave(transaction: Transaction, connection: Connection) {
  try {
    await transaction.trxClient.query(connection, 'ROLLBACK;')
  } catch (error) {
    if (!nothingToRollBack(error)) connection.__knex__disposed = error as Error
  }
}

/**
 * SQLite whose transactions take the write lock at once (BEGIN IMMEDIATE), and whose failed COMMIT ends the transaction.
 *
 * A deferred transaction that reads first and writes later can be refused in the middle; one that begins as a
 * writer waits at its beginning, before any work is done.
 *
 * After a COMMIT that fails (a full disk) SQLite's transaction stands open still. knex takes it for ended, refuses to roll it back and gives the
 * connection to the next: every act after it would fail, and single writes would be lost with it.
 */
export class ImmediateDialect extends (SqliteKnexDialect as unknown as new (...args: unknown[]) => { transaction(...args: unknown[]): Transaction }) {
  override transaction(...args: unknown[]): Transaction {
    const transaction = super.transaction(...args)
    transaction.begin = function begin(this: Transaction, connection) {
      return this.query(connection, 'BEGIN IMMEDIATE;')
    }
    transaction.commit = async function commit(this: Transaction, connection, value) {
      try {
        await this.trxClient.query(connection, 'COMMIT;')
      } catch (error) {
        await leave(this, connection)
        this._completed = true
        this._rejecter(error)
        return
      }
      this._completed = true
      this._resolver(value)
    }
    return transaction
  }
}
