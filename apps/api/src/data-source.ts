import 'reflect-metadata'
import pg from 'pg'
import { DataSource, MigrationExecutor } from 'typeorm'
import { ENTITIES } from './entities.js'
import { MIGRATIONS } from './migrations/index.js'

export interface DataSourceOptions {
  readonly url: string
  readonly poolSize?: number
  /** Told when an idle connection breaks, as they all do when PostgreSQL restarts. */
  readonly onConnectionLost?: (error: Error) => void
}

/** No statement of a request takes longer, and no transaction stands open longer, than this; in milliseconds. */
const STATEMENT_TIMEOUT_MS = 15_000
const IDLE_IN_TRANSACTION_MS = 10_000
const CONNECT_TIMEOUT_MS = 5_000

/**
 * How PostgreSQL plans what requests ask. All of it reads a few rows by an index. A prepared statement is planned
 * once for all its values, and that plan lives as long as the connection: it must not read whole tables just
 * because they were small, or empty, when the house opened. Compiling a statement costs more than running it.
 */
export const SESSION_SETTINGS = '-c plan_cache_mode=force_generic_plan -c enable_seqscan=off -c jit=off'

/** Days stay text (`YYYY-MM-DD`): a date without a zone must not become an instant of this machine's zone. */
const types: pg.CustomTypesConfig = {
  getTypeParser: ((oid: number, format?: 'text' | 'binary') =>
    oid === pg.types.builtins.DATE
      ? (text: string) => text
      : pg.types.getTypeParser(oid, format as 'text')) as never,
}

/** The house's database. Nothing is connected until `initialize()`. */
export function createDataSource(options: DataSourceOptions): DataSource {
  return new DataSource({
    type: 'postgres',
    url: options.url,
    poolSize: options.poolSize ?? 8,
    applicationName: 'bellpull',
    connectTimeoutMS: CONNECT_TIMEOUT_MS,
    poolErrorHandler: options.onConnectionLost ?? (() => undefined),
    extra: {
      types,
      statement_timeout: STATEMENT_TIMEOUT_MS,
      idle_in_transaction_session_timeout: IDLE_IN_TRANSACTION_MS,
      keepAlive: true,
      options: SESSION_SETTINGS,
    },
    entities: ENTITIES,
    migrations: MIGRATIONS,
    migrationsTransactionMode: 'each',
    installExtensions: false,
    uuidExtension: 'pgcrypto',
    logging: false,
  })
}

/** Any number that nothing else in this database takes: processes that migrate at once queue here. */
const MIGRATION_LOCK = 8_420_001

/**
 * Runs the migrations that are still to run. Processes that start at once take turns; the second finds nothing
 * left to do. Lock and migrations share one connection, so that the lock cannot outlive or leave the work.
 *
 * @returns the names of those that were run.
 */
export async function migrate(dataSource: DataSource): Promise<string[]> {
  const runner = dataSource.createQueryRunner()
  await runner.connect()
  try {
    // Waiting one's turn, and changing a large table, may take long.
    await runner.query('SET statement_timeout = 0')
    await runner.query('SELECT pg_advisory_lock($1)', [MIGRATION_LOCK])
    try {
      const executor = new MigrationExecutor(dataSource, runner)
      executor.transaction = 'each'
      return (await executor.executePendingMigrations()).map((migration) => migration.name)
    } finally {
      await runner.query('SELECT pg_advisory_unlock($1)', [MIGRATION_LOCK])
      await runner.query(`SET statement_timeout = ${STATEMENT_TIMEOUT_MS}`)
    }
  } finally {
    await runner.release()
  }
}
