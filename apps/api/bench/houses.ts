import { spawn, type ChildProcess } from 'node:child_process'
import { once } from 'node:events'
import { randomUUID } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import pg from 'pg'
import { administer } from '../dev/administer.js'
import { freePort } from '../dev/postgres.js'
import { createDataSource, migrate, SESSION_SETTINGS } from '../src/data-source.js'
import { AccessTokens } from '../src/modules/session/index.js'
import { systemClock } from '../src/platform/clock.js'
import type { Cluster } from '../test/cluster.js'
import { Child } from './child.js'
import { fillHouse, type Stock } from './fill.js'
import { fillPast, fillPeerPast } from './past.js'
import { fillPeer, PEER_SCHEMA } from './peer/schema.js'
import { CALLERS, callerId, sessionId } from './world.js'

/** Both sides get this many connections. */
const POOL_SIZE = 8

const api = dirname(import.meta.dirname)

/** A house that is open: something that answers on a port, over a database of its own. */
export interface House {
  readonly name: string
  readonly port: number
  readonly pid: number
  readonly url: string
  readonly stock: Stock
  readonly speaks: 'socket.io' | 'plain'
  /** Access tokens of the callers, in order; those of the product are good for 15 minutes. */
  tokens(): string[]
  close(): Promise<void>
}

/** Runs statements one after the other on one connection. */
export async function runAll(url: string, statements: readonly string[]): Promise<void> {
  const client = new pg.Client({ connectionString: url })
  await client.connect()
  try {
    for (const statement of statements) await client.query(statement)
  } finally {
    await client.end()
  }
}

async function createFilled(
  cluster: Cluster,
  name: string,
  fill: (url: string) => Promise<void>,
): Promise<string> {
  await administer(cluster.url(), `CREATE DATABASE ${name}`)
  const url = cluster.url(name)
  await fill(url)
  await runAll(url, ['VACUUM (ANALYZE)', 'CHECKPOINT'])
  return url
}

const past = (statements: string[]): string[] => ['BEGIN', ...statements, 'COMMIT']

/** Opens the minimal server over a new database. */
export async function openPeer(cluster: Cluster, name: string, stock: Stock): Promise<House> {
  const url = await createFilled(cluster, name, (at) =>
    runAll(at, [
      PEER_SCHEMA,
      ...fillPeer(stock.cases, stock.unitsAProduct),
      ...past(fillPeerPast(stock.pastCalls)),
    ]),
  )
  const tokens = Array.from({ length: CALLERS }, () => randomUUID())
  const people = new Map(tokens.map((token, n) => [token, callerId(n)]))
  const child = Child.start('peer/server.ts')
  const port = await child.ask<number>('start', {
    databaseUrl: url,
    databaseOptions: SESSION_SETTINGS,
    poolSize: POOL_SIZE,
    people,
  })
  const pid = child.process.pid ?? 0
  return { name, port, pid, url, stock, speaks: 'plain', tokens: () => tokens, close: () => child.stop() }
}

/** Makes a new database of the product and fills it. @returns its address. */
export const createHouse = (cluster: Cluster, name: string, stock: Stock): Promise<string> =>
  createFilled(cluster, name, async (url) => {
    const dataSource = createDataSource({ url, poolSize: 2 })
    await dataSource.initialize()
    try {
      await migrate(dataSource)
    } finally {
      await dataSource.destroy()
    }
    const { pastCalls, products } = stock
    await runAll(url, [...fillHouse(stock), ...(pastCalls > 0 ? past(fillPast(pastCalls, products)) : [])])
  })

export interface ProductHouse extends House {
  /** The process, with a channel to {@link memoryOf} where it was asked for. */
  readonly process: ChildProcess
}

/**
 * Opens the built product over a database, as its own process and with what a house would set.
 *
 * @param collects it can be asked to collect its garbage: for measuring memory.
 */
export async function openProduct(
  name: string,
  url: string,
  stock: Stock,
  collects = false,
): Promise<ProductHouse> {
  const port = await freePort()
  const secret = randomUUID() + randomUUID()
  const flags = collects ? ['--expose-gc', '--import', join(import.meta.dirname, 'collect.mjs')] : []
  const child = spawn(process.execPath, [...flags, join(api, 'dist/main.js')], {
    env: {
      PATH: process.env['PATH'] ?? '',
      NODE_ENV: 'production',
      BELLPULL_PORT: String(port),
      BELLPULL_DATABASE_URL: url,
      BELLPULL_TOKEN_SECRET: secret,
      BELLPULL_LOG_LEVEL: 'warn',
      BELLPULL_POOL_SIZE: String(POOL_SIZE),
    },
    stdio: ['ignore', 'pipe', 'inherit', ...(collects ? (['ipc'] as const) : [])],
  })
  let words = ''
  child.stdout?.setEncoding('utf8').on('data', (chunk: string) => (words = (words + chunk).slice(-4_000)))
  const close = async (): Promise<void> => {
    if (child.exitCode !== null || child.signalCode !== null) return
    const ended = once(child, 'exit')
    child.kill('SIGKILL')
    await ended
  }
  process.once('exit', () => child.kill('SIGKILL'))
  const deadline = Date.now() + 30_000
  while (!(await isReady(port))) {
    if (child.exitCode !== null || Date.now() > deadline) {
      await close()
      throw new Error(`the product did not open:\n${words}`)
    }
    await wait(50)
  }
  const tokens = (): string[] => {
    const issuer = new AccessTokens(secret, systemClock('UTC'))
    return Array.from({ length: CALLERS }, (_, n) => issuer.issue(callerId(n), sessionId(n)))
  }
  return { name, port, pid: child.pid ?? 0, url, stock, speaks: 'socket.io', tokens, close, process: child }
}

const isReady = (port: number): Promise<boolean> =>
  fetch(`http://127.0.0.1:${port}/api/v1/health/ready`).then(
    (response) => response.ok,
    () => false,
  )

/** Processor time that a process has had so far, in milliseconds. */
export function cpuMsOf(pid: number): number {
  const stat = readFileSync(`/proc/${pid}/stat`, 'utf8')
  // The second field is the program's name in brackets and may hold anything, so fields are counted after it.
  const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ')
  const ticks = Number(fields[11]) + Number(fields[12])
  return ticks * 10
}

/** Memory of a house that {@link openProduct} opened to be collected, after its garbage is gone, in bytes. */
export async function memoryOf(house: ProductHouse): Promise<NodeJS.MemoryUsage> {
  const answered = once(house.process, 'message')
  house.process.send('collect')
  const [usage] = (await answered) as [NodeJS.MemoryUsage]
  return usage
}
