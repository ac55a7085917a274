import { createServer } from 'node:http'
import { setTimeout as wait } from 'node:timers/promises'
import type { DataSource } from 'typeorm'
import { createApp } from './app.js'
import { compose } from './compose.js'
import { createDataSource, migrate } from './data-source.js'
import { keepHouse } from './modules/housekeeping/index.js'
import { systemClock } from './platform/clock.js'
import { ConfigFault, configOfProcess, type Config } from './platform/config.js'
import { isAway } from './platform/db/sql.js'
import { createLog, type Logger } from './platform/log.js'
import { SocketServer } from './platform/realtime/socket-server.js'

/** Between two tries to reach the database at the start, in milliseconds. */
const RETRY_MS = 1_000
/** Requests that run when the house closes may take this long to end, in milliseconds. */
const CLOSE_WITHIN_MS = 8_000

/** Connects and migrates, and waits for a database that is not there yet. @returns whether it came before the end. */
async function open(dataSource: DataSource, log: Logger, stopped: () => boolean): Promise<boolean> {
  while (!stopped()) {
    try {
      if (!dataSource.isInitialized) await dataSource.initialize()
      const migrations = await migrate(dataSource)
      if (migrations.length > 0) log.info({ event: 'database.migrated', migrations })
      return true
    } catch (error) {
      if (!isAway(error)) throw error
      log.warn({ event: 'database.away', err: error }, 'the database is away; trying again')
      await wait(RETRY_MS)
    }
  }
  return false
}

async function run(config: Config): Promise<void> {
  const log = createLog(config.logLevel)
  const clock = systemClock(config.houseZone)
  let stopping = false
  let stop = (): void => {
    stopping = true
  }
  for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => stop())

  const dataSource = createDataSource({
    url: config.databaseUrl,
    poolSize: config.poolSize,
    onConnectionLost: (err) => log.warn({ event: 'database.connection-lost', err }),
  })
  if (!(await open(dataSource, log, () => stopping))) return

  const sockets = new SocketServer({ log })
  const house = compose({
    config,
    clock,
    log,
    dataSource,
    publisher: sockets,
    socketCount: () => sockets.count,
  })
  const server = createServer(createApp(house))
  sockets.attach(server, house.live)
  const stopKeeping = keepHouse(house.database, clock, log)

  await new Promise<void>((resolve, reject) => {
    server.once('error', reject)
    server.listen(config.port, config.host, resolve)
  })
  const address = server.address()
  const port = typeof address === 'object' && address ? address.port : config.port
  log.info({ event: 'house.open', host: config.host, port }, 'the house is open')

  await new Promise<void>((resolve) => {
    stop = resolve
    if (stopping) resolve()
  })
  log.info({ event: 'house.closing' })
  stopKeeping()
  // Closes the HTTP server with the sockets; requests that run may end.
  await Promise.race([sockets.close(), wait(CLOSE_WITHIN_MS, undefined, { ref: false })])
  server.closeAllConnections()
  await dataSource.destroy()
  log.info({ event: 'house.closed' })
}

try {
  await run(configOfProcess())
} catch (error) {
  const text = error instanceof ConfigFault ? error.message : error
  createLog('info').fatal({ event: 'house.cannot-open', err: text }, String(text))
  process.exitCode = 1
}
