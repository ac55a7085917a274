import { spawn, type ChildProcess } from 'node:child_process'
import { createRequire } from 'node:module'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startTestApi } from '../test/app.js'
import { createDatabase, startCluster, type Cluster, type FreshDatabase } from '../test/cluster.js'

const LONG = { timeout: 45_000, interval: 100 }
const here = dirname(fileURLToPath(import.meta.url))
const tsx = join(dirname(createRequire(import.meta.url).resolve('tsx/package.json')), 'dist/cli.mjs')

/** A real process of the house: its lines, where it listens, how it ended. */
interface Running {
  readonly child: ChildProcess
  readonly lines: string[]
  readonly port: () => number
  readonly ended: Promise<number | null>
}

const running: Running[] = []
let cluster: Cluster
let fresh: FreshDatabase

beforeAll(async () => {
  cluster = await startCluster()
  fresh = await createDatabase(cluster.url())
})
afterAll(async () => {
  for (const { child } of running) child.kill('SIGKILL')
  await cluster.stop()
})

function start(env: Record<string, string>): Running {
  const child = spawn(process.execPath, [tsx, '--conditions=source', 'main.ts'], {
    cwd: here,
    env: { ...process.env, NODE_OPTIONS: '', BELLPULL_PORT: '0', ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  const lines: string[] = []
  for (const stream of [child.stdout, child.stderr])
    stream?.setEncoding('utf8').on('data', (text: string) => lines.push(...text.split('\n').filter(Boolean)))
  const house: Running = {
    child,
    lines,
    port: () => {
      const open = lines.find((line) => line.includes('"house.open"'))
      if (open === undefined) throw new Error(`not open yet:\n${lines.join('\n')}`)
      return (JSON.parse(open) as { port: number }).port
    },
    ended: new Promise((resolve) => child.once('exit', resolve)),
  }
  running.push(house)
  return house
}

const env = () => ({
  BELLPULL_DATABASE_URL: fresh.url,
  BELLPULL_TOKEN_SECRET: 'only-for-tests-only-for-tests-only',
})
const status = async (house: Running, path = '/api/v1/health/ready') =>
  (await fetch(`http://127.0.0.1:${house.port()}${path}`)).status

describe('a process of the house', () => {
  it('names every fault of its configuration and opens nothing', async () => {
    const house = start({ BELLPULL_DATABASE_URL: '', BELLPULL_TOKEN_SECRET: 'short' })
    expect(await house.ended).toBe(1)
    expect(house.lines.join('')).toContain('BELLPULL_DATABASE_URL is missing')
    expect(house.lines.join('')).toContain('BELLPULL_TOKEN_SECRET is shorter than 32 characters')
  }, 60_000)

  it('opens beside another one on the same empty database, bears its restart, and closes cleanly', async () => {
    const houses = [start(env()), start(env())]
    for (const house of houses) await vi.waitFor(async () => expect(await status(house)).toBe(200), LONG)
    const migrated = houses.filter((house) =>
      house.lines.some((line) => line.includes('"database.migrated"')),
    )
    expect(migrated).toHaveLength(1)

    await cluster.restart()
    for (const house of houses) await vi.waitFor(async () => expect(await status(house)).toBe(200), LONG)
    for (const house of houses) expect(house.child.exitCode).toBeNull()

    for (const house of houses) house.child.kill('SIGTERM')
    expect(await Promise.all(houses.map((house) => house.ended))).toEqual([0, 0])
    for (const house of houses) expect(house.lines.at(-1)).toContain('"house.closed"')
  }, 120_000)

  it('waits for a database that is not there yet, and can be stopped while it waits', async () => {
    const url = new URL(fresh.url)
    url.port = '1'
    const house = start({ ...env(), BELLPULL_DATABASE_URL: url.href })
    await vi.waitFor(() => expect(house.lines.join('')).toContain('"database.away"'), LONG)
    house.child.kill('SIGINT')
    expect(await house.ended).toBe(0)
  }, 60_000)
})

describe('while PostgreSQL is away', () => {
  it('requests get 503, ready says so, and everything goes on when it is back', async () => {
    const database = await createDatabase(cluster.url())
    const api = await startTestApi({ database, sockets: true, migrate: true })
    const person = await api.signInAs('circulator')
    await api.as(person).get('/me').expect(200)

    const away = new Set<number>()
    let over = false
    const asking = (async () => {
      while (!over) {
        const replies = await Promise.all([api.as(person).get('/rooms'), api.as(null).get('/health/ready')])
        for (const reply of replies) away.add(reply.status)
      }
    })()
    await cluster.restart()
    await vi.waitFor(() => api.as(person).get('/rooms').expect(200), LONG)
    over = true
    await asking
    expect([...away].filter((code) => code !== 200 && code !== 503)).toEqual([])

    await api.signInAs('scrub')
    expect(
      await api.house.database.transaction(async (sql) => (await sql.query({ text: 'SELECT 1' })).rowCount),
    ).toBe(1)
    await api.close()
  }, 120_000)
})
