import pg from 'pg'
import type { DataSource } from 'typeorm'

/** One statement. With a `name` it is prepared once a connection and then only executed. */
export interface Query {
  readonly name?: string
  readonly text: string
  readonly values?: unknown[]
}

/** Where statements go: the pool, or one connection inside a transaction. */
export interface Sql {
  query<R>(q: Query): Promise<{ rows: R[]; rowCount: number }>
}

/** PostgreSQL could not be reached, or went away while it was asked. Nobody knows then whether a commit arrived. */
export class DatabaseAway extends Error {
  override readonly name = 'DatabaseAway'
  constructor(cause: unknown) {
    super('the database is away', { cause })
  }
}

/** Class 08 is a lost connection; the others are a server that goes down, comes up, or is full. */
const AWAY = /^(08...|57P0[1-3]|53300)$/
/** Two transactions were in each other's way: the whole work may be done again. */
const TRY_AGAIN = ['40P01', '40001']
const TRIES = 3

/** The fault that PostgreSQL itself reported, however an ORM wrapped it, or `null`. */
export function databaseFault(error: unknown): pg.DatabaseError | null {
  if (error instanceof pg.DatabaseError) return error
  const driverError = error instanceof Error && 'driverError' in error ? error.driverError : null
  return driverError instanceof pg.DatabaseError ? driverError : null
}

/** Whether PostgreSQL was away: anything that went wrong on the way there and was not said by it. */
export function isAway(error: unknown): boolean {
  if (error instanceof DatabaseAway) return true
  const fault = databaseFault(error)
  if (fault) return AWAY.test(fault.code ?? '')
  return error instanceof Error && ('driverError' in error || hasNetworkCode(error) || isUnnamed(error))
}

/** The driver gives these no code of any kind. */
const isUnnamed = (error: Error): boolean =>
  /^(Connection terminated|timeout expired|timeout exceeded when trying to connect)/.test(error.message)

const hasNetworkCode = (error: Error): boolean =>
  'code' in error && /^(ECONN|ENOTFOUND|EAI_|EPIPE|ETIMEDOUT|EHOSTUNREACH)/.test(String(error.code))

async function ask<R>(to: pg.Pool | pg.PoolClient, q: Query): Promise<{ rows: R[]; rowCount: number }> {
  try {
    const result = await to.query<R & pg.QueryResultRow>(q)
    return { rows: result.rows, rowCount: result.rowCount ?? 0 }
  } catch (error) {
    const fault = databaseFault(error)
    throw fault && !AWAY.test(fault.code ?? '') ? fault : new DatabaseAway(error)
  }
}

/** Hand-written statements, over the connections that the ORM holds anyway. */
export class Database implements Sql {
  readonly #dataSource: DataSource

  constructor(dataSource: DataSource) {
    this.#dataSource = dataSource
  }

  /** @throws {pg.DatabaseError} as PostgreSQL said it. @throws {DatabaseAway} */
  async query<R>(q: Query): Promise<{ rows: R[]; rowCount: number }> {
    return await ask<R>(this.#pool(), q)
  }

  /**
   * Does the work in one READ COMMITTED transaction on one connection and commits it, or leaves no trace.
   * After a deadlock or a serialisation failure the whole work is done again, at most three times in all:
   * it may therefore change nothing but the database.
   *
   * @throws what the work throws, {@link DatabaseAway}, or `pg.DatabaseError`.
   */
  async transaction<T>(work: (sql: Sql) => Promise<T>): Promise<T> {
    for (let attempt = 1; ; attempt += 1) {
      try {
        return await this.#once(work)
      } catch (error) {
        const again = TRY_AGAIN.includes(databaseFault(error)?.code ?? '')
        if (!again || attempt === TRIES) throw error
      }
    }
  }

  async #once<T>(work: (sql: Sql) => Promise<T>): Promise<T> {
    const client = await this.#connect()
    // Without a listener, a connection that breaks while it is lent out would end the process.
    let broken: Error | undefined
    const onError = (error: Error): void => {
      broken = error
    }
    client.on('error', onError)
    try {
      await ask(client, { text: 'BEGIN ISOLATION LEVEL READ COMMITTED' })
      const result = await work({ query: (q) => ask(client, q) })
      await ask(client, { text: 'COMMIT' })
      return result
    } catch (error) {
      if (!broken)
        await client.query('ROLLBACK').catch((failed: unknown) => {
          broken = failed instanceof Error ? failed : new Error(String(failed))
        })
      throw error
    } finally {
      client.removeListener('error', onError)
      client.release(broken)
    }
  }

  async #connect(): Promise<pg.PoolClient> {
    try {
      return await this.#pool().connect()
    } catch (error) {
      throw new DatabaseAway(error)
    }
  }

  #pool(): pg.Pool {
    // The driver's type hides that for PostgreSQL `master` is the pool.
    const pool = (this.#dataSource.driver as unknown as { master?: pg.Pool }).master
    if (!pool) throw new DatabaseAway(new Error('not connected'))
    return pool
  }
}
