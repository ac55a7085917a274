import { randomUUID } from 'node:crypto'
import { createServer, type Server } from 'node:http'
import type { AddressInfo } from 'node:net'
import { ROLES, type Role } from '@bellpull/domain'
import request from 'supertest'
import type { DataSource } from 'typeorm'
import { createApp } from '../src/app.js'
import { compose, type House } from '../src/compose.js'
import { createDataSource, migrate } from '../src/data-source.js'
import { hashPassword, hashPin } from '../src/modules/session/index.js'
import { loadConfig, type Config } from '../src/platform/config.js'
import { createLog, type Logger } from '../src/platform/log.js'
import type { Delta, Publisher } from '../src/platform/realtime/publisher.js'
import { SocketServer } from '../src/platform/realtime/socket-server.js'
import { SettableClock } from './clock.js'
import { freshDatabase, type FreshDatabase } from './database.js'

/** Remembers what the screens would have been told. */
export class RecordingPublisher implements Publisher {
  readonly deltas: Delta[] = []
  readonly stock: string[][] = []
  readonly notices: ({ kind: string } & Record<string, unknown>)[] = []
  readonly ended: string[] = []

  delta(delta: Delta): void {
    this.deltas.push(delta)
  }
  stockChanged(catalogueItemIds: string[]): void {
    this.stock.push(catalogueItemIds)
  }
  notice(message: { kind: string } & Record<string, unknown>): void {
    this.notices.push(message)
  }
  sessionEnded(sessionId: string): void {
    this.ended.push(sessionId)
  }

  /** Everything that was told, for tests in which nothing may have been. */
  get all(): unknown[] {
    return [...this.deltas, ...this.stock, ...this.notices, ...this.ended]
  }
  clear(): void {
    for (const list of [this.deltas, this.stock, this.notices, this.ended]) list.length = 0
  }
}

/** Somebody signed in, with the header that says so. */
export interface SignedIn {
  readonly id: string
  readonly name: string
  readonly role: Role
  readonly sessionId: string
  readonly token: string
}

export const TEST_PASSWORD = 'brass-bell-linen-cord'
export const TEST_PIN = '2468'

/** Hashing is slow on purpose: once for a whole file is enough. */
let secrets: Promise<[string, string]> | undefined

export interface TestApiOptions {
  /** The same database for two APIs; made, and dropped again, when left out. */
  readonly database?: FreshDatabase
  /** The database given has no tables yet. */
  readonly migrate?: boolean
  readonly clock?: SettableClock
  /** With real sockets in place of the recording publisher. */
  readonly sockets?: boolean
  readonly env?: Record<string, string>
  readonly log?: Logger
}

export interface TestApi {
  readonly house: House
  readonly dataSource: DataSource
  readonly clock: SettableClock
  readonly published: RecordingPublisher
  readonly config: Config
  readonly databaseUrl: string
  /** Where it listens, `http://127.0.0.1:port`. */
  readonly url: string
  /** A person of this role, made at first asking (one for each name), and a session of theirs. */
  signInAs(role: Role, name?: string): Promise<SignedIn>
  /** A request as this person, or as nobody; an Idempotency-Key is added to what changes something. */
  as(who: SignedIn | null): Requests
  rows<R = Record<string, unknown>>(text: string, values?: unknown[]): Promise<R[]>
  close(): Promise<void>
}

export interface Requests {
  get(path: string): request.Test
  post(path: string, body?: unknown, key?: string | null): request.Test
  put(path: string, body?: unknown, key?: string | null): request.Test
  patch(path: string, body?: unknown, key?: string | null): request.Test
  delete(path: string, key?: string | null): request.Test
}

/** A whole API on a database of its own, on a free port, with a clock that stands still. Close it in `afterAll`. */
export async function startTestApi(options: TestApiOptions = {}): Promise<TestApi> {
  const own = options.database === undefined ? await freshDatabase() : null
  const databaseUrl = (options.database ?? own)!.url
  const config = loadConfig({
    NODE_ENV: 'test',
    BELLPULL_DATABASE_URL: databaseUrl,
    BELLPULL_TOKEN_SECRET: 'only-for-tests-only-for-tests-only',
    BELLPULL_POOL_SIZE: '6',
    BELLPULL_LOG_LEVEL: 'silent',
    ...options.env,
  })
  const clock = options.clock ?? new SettableClock()
  const log = options.log ?? createLog('silent')
  const published = new RecordingPublisher()
  const sockets = options.sockets ? new SocketServer({ log, sessionCheckMs: 200, queueCheckMs: 50 }) : null
  const dataSource = createDataSource({ url: databaseUrl, poolSize: config.poolSize })
  await dataSource.initialize()
  if (options.migrate) await migrate(dataSource)
  const house = compose({
    config,
    clock,
    log,
    dataSource,
    publisher: sockets ?? published,
    socketCount: () => sockets?.count ?? 0,
  })
  const server = createServer(createApp(house))
  sockets?.attach(server, house.live)
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve))
  const url = `http://127.0.0.1:${(server.address() as AddressInfo).port}`

  const rows = async <R>(text: string, values: unknown[] = []): Promise<R[]> =>
    (await house.database.query<R>({ text, values })).rows

  return {
    house,
    dataSource,
    clock,
    published,
    config,
    databaseUrl,
    url,
    rows,
    signInAs: (role, name = `Test ${role}`) =>
      signInAs({ house, dataSource, url, clock, rows } as TestApi, role, name),
    as: (who) => requests(url, who),
    close: async () => {
      await sockets?.close()
      await closeServer(server)
      await dataSource.destroy()
      await own?.drop()
    },
  }
}

async function signInAs(api: TestApi, role: Role, name: string): Promise<SignedIn> {
  const email = `${name.toLowerCase().replaceAll(' ', '.')}@tests.example`
  secrets ??= Promise.all([hashPassword(TEST_PASSWORD), hashPin(TEST_PIN)])
  const [passwordHash, pinHash] = await secrets
  await api.rows(
    `INSERT INTO person (id, email, name, initials, role, password_hash, pin_hash) VALUES ($1, $2, $3, $4, $5, $6, $7)
     ON CONFLICT (email) DO NOTHING`,
    [
      randomUUID(),
      email,
      name,
      name
        .split(' ')
        .map((word) => word[0])
        .join(''),
      role,
      passwordHash,
      pinHash,
    ],
  )
  const reply = await request(api.url)
    .post('/api/v1/session')
    .send({ email, password: TEST_PASSWORD })
    .expect(200)
  const { accessToken, user } = reply.body as {
    accessToken: string
    user: { id: string; name: string; role: Role }
  }
  const { sid } = JSON.parse(Buffer.from(accessToken.split('.')[1]!, 'base64url').toString()) as {
    sid: string
  }
  return { ...user, token: accessToken, sessionId: sid }
}

function requests(url: string, who: SignedIn | null): Requests {
  const dress = (test: request.Test, body?: unknown, key: string | null = randomUUID()): request.Test => {
    if (who) void test.set('Authorization', `Bearer ${who.token}`)
    if (key !== null) void test.set('Idempotency-Key', key)
    return body === undefined ? test : test.send(body as object)
  }
  const agent = request(url)
  return {
    get: (path) => dress(agent.get(`/api/v1${path}`), undefined, null),
    post: (path, body, key) => dress(agent.post(`/api/v1${path}`), body ?? {}, key),
    put: (path, body, key) => dress(agent.put(`/api/v1${path}`), body ?? {}, key),
    patch: (path, body, key) => dress(agent.patch(`/api/v1${path}`), body ?? {}, key),
    delete: (path, key) => dress(agent.delete(`/api/v1${path}`), undefined, key),
  }
}

async function closeServer(server: Server): Promise<void> {
  if (!server.listening) return
  const closed = new Promise<void>((resolve) => server.close(() => resolve()))
  server.closeAllConnections()
  await closed
}

/** One person of every role. */
export async function everyRole(api: TestApi): Promise<Record<Role, SignedIn>> {
  const people = {} as Record<Role, SignedIn>
  for (const role of ROLES) people[role] = await api.signInAs(role)
  return people
}
