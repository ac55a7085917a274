import { execFile, spawn, type ChildProcess, type SpawnOptions } from 'node:child_process'
import { randomUUID } from 'node:crypto'
import { accessSync, constants, existsSync, readdirSync, readFileSync, rmSync } from 'node:fs'
import { chown, mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises'
import { createServer } from 'node:net'
import { tmpdir } from 'node:os'
import { delimiter, dirname, join } from 'node:path'
import { promisify } from 'node:util'

const run = promisify(execFile)

/** Who runs the server's programs: they refuse to run as root, so root lends them the packages' own user. */
export interface ServerUser {
  readonly uid: number
  readonly gid: number
  readonly name: string
}

/** Raised when something on this machine is in the way; the message is meant for the person at the keyboard. */
export class InTheWay extends Error {
  override readonly name = 'InTheWay'
}

/**
 * The folder of the newest PostgreSQL server on this machine: Debian's own folders first, else the one on PATH.
 *
 * @throws {InTheWay} when there is none.
 */
export function findServer(): string {
  const debian = '/usr/lib/postgresql'
  const versions = existsSync(debian) ? readdirSync(debian).sort((a, b) => Number(b) - Number(a)) : []
  const folders = [
    ...versions.map((version) => join(debian, version, 'bin')),
    ...(process.env['PATH'] ?? '').split(delimiter),
  ]
  const found = folders.find((folder) =>
    ['initdb', 'pg_ctl', 'postgres'].every((program) => isProgram(join(folder, program))),
  )
  if (found === undefined)
    throw new InTheWay('PostgreSQL is not on this machine; ./docker-less-dev.sh installs it.')
  return found
}

function isProgram(path: string): boolean {
  try {
    accessSync(path, constants.X_OK)
    return true
  } catch {
    return false
  }
}

/**
 * The user to lend to the server's programs: `postgres` when we are root, nobody else otherwise.
 *
 * @throws {InTheWay} when we are root and the machine has no such user.
 */
export function serverUser(): ServerUser | null {
  if (process.getuid?.() !== 0) return null
  const line = readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .find((entry) => entry.startsWith('postgres:'))
  const [name, , uid, gid] = (line ?? '').split(':')
  if (name === undefined || uid === undefined || gid === undefined)
    throw new InTheWay('PostgreSQL refuses to run as root and this machine has no user "postgres" to run it.')
  return { name, uid: Number(uid), gid: Number(gid) }
}

/** Options that run a program of the server as {@link serverUser}, from a folder that everybody may enter. */
export function asServer(user: ServerUser | null) {
  return {
    cwd: '/',
    env: { ...process.env, LC_ALL: 'C.UTF-8', ...(user && { HOME: '/', USER: user.name }) },
    ...(user && { uid: user.uid, gid: user.gid }),
  }
}

/** May the server's user enter this folder? Home folders are often closed to it. */
export async function canEnter(folder: string, user: ServerUser | null): Promise<boolean> {
  try {
    await run('/bin/sh', ['-c', 'cd -- "$1"', 'sh', folder], asServer(user))
    return true
  } catch {
    return false
  }
}

/** Makes a folder that only the server's user can read; it may exist already. */
export async function makeServerFolder(folder: string, user: ServerUser | null): Promise<void> {
  await mkdir(folder, { recursive: true, mode: 0o700 })
  if (user) await chown(folder, user.uid, user.gid)
}

/**
 * Lays a new cluster into an empty folder of the server's user. Its only role is `bellpull`, which signs in over TCP
 * with the password.
 */
export async function initCluster(server: string, data: string, password: string, user: ServerUser | null) {
  const secret = await mkdtemp(join(tmpdir(), 'bellpull-secret-'))
  try {
    await writeFile(join(secret, 'password'), `${password}\n`, { mode: 0o600 })
    if (user) {
      await chown(join(secret, 'password'), user.uid, user.gid)
      await chown(secret, user.uid, user.gid)
    }
    const flags = [
      '--no-sync',
      '--encoding=UTF8',
      '--locale=C.UTF-8',
      '--auth=scram-sha-256',
      '--username=bellpull',
    ]
    await run(
      join(server, 'initdb'),
      [...flags, `--pwfile=${join(secret, 'password')}`, '-D', data],
      asServer(user),
    )
  } finally {
    await rm(secret, { recursive: true, force: true })
  }
}

/** A TCP port of the loopback address that nobody listens on at this moment. */
export async function freePort(): Promise<number> {
  return await new Promise((resolve, reject) => {
    const probe = createServer()
    probe.once('error', reject)
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address()
      probe.close(() => {
        if (address !== null && typeof address === 'object') resolve(address.port)
        else reject(new Error('the probe has no port'))
      })
    })
  })
}

/** A server that lives as long as this process, in a folder that goes away with it. */
export interface ThrowawayServer {
  readonly port: number
  readonly password: string
  /** Takes the server away and brings it back on the same port with the same data, as an administrator would. */
  restart(): Promise<void>
  stop(): Promise<void>
}

/**
 * Starts PostgreSQL on a free port of the loopback address, with its data in a new folder under the system's temporary
 * one.
 *
 * @param durable true keeps every promise about a lost machine (for measuring); false gives them up for speed (for tests).
 * @param settings further `name=value` settings of the server.
 * @throws {InTheWay} when PostgreSQL is missing; an error with the server's own words when it does not come up in 30 s.
 */
export async function startThrowawayServer(
  durable: boolean,
  settings: readonly string[] = [],
): Promise<ThrowawayServer> {
  const server = findServer()
  const user = serverUser()
  const folder = await mkdtemp(join(tmpdir(), 'bellpull-postgres-'))
  if (user) await chown(folder, user.uid, user.gid)
  const password = randomUUID()
  const data = join(folder, 'data')
  const careless = ['fsync=off', 'full_page_writes=off', 'synchronous_commit=off', 'autovacuum=off']
  const all = [
    'listen_addresses=127.0.0.1',
    'unix_socket_directories=',
    'max_connections=200',
    ...(durable ? [] : [...careless, 'wal_level=minimal', 'max_wal_senders=0']),
    ...settings,
  ]
  const launch = async (port: number) => {
    const args = ['-D', data, '-p', String(port), ...all.flatMap((setting) => ['-c', setting])]
    const options: SpawnOptions = { ...asServer(user), detached: true, stdio: ['ignore', 'ignore', 'pipe'] }
    const child = spawn(join(server, 'postgres'), args, options)
    return { child, ...(await comesUp(child, join(data, 'postmaster.pid'))) }
  }
  try {
    await initCluster(server, data, password, user)
    // Between choosing a free port and taking it somebody else may take it, so a refused start is tried on another one.
    for (let attempt = 1; ; attempt += 1) {
      const port = await freePort()
      const came = await launch(port)
      if (came.up) return throwaway(came.child, folder, port, password, () => launch(port))
      if (attempt === 3) throw new Error(`PostgreSQL did not start:\n${came.words}`)
    }
  } catch (error) {
    await rm(folder, { recursive: true, force: true })
    throw error
  }
}

function throwaway(
  first: ChildProcess,
  folder: string,
  port: number,
  password: string,
  launch: () => Promise<{ child: ChildProcess; up: boolean; words: string }>,
): ThrowawayServer {
  let child = first
  const killAtExit = () => {
    child.kill('SIGQUIT')
    rmSync(folder, { recursive: true, force: true, maxRetries: 5 })
  }
  process.once('exit', killAtExit)
  const end = async (signal: NodeJS.Signals) => {
    const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()))
    if (child.exitCode === null && child.signalCode === null && child.kill(signal)) await ended
  }
  return {
    port,
    password,
    async restart() {
      await end('SIGINT')
      const came = await launch()
      if (!came.up) throw new Error(`PostgreSQL did not come back:\n${came.words}`)
      child = came.child
    },
    async stop() {
      process.removeListener('exit', killAtExit)
      // SIGQUIT is the server's "immediate": what is thrown away needs no checkpoint.
      await end('SIGQUIT')
      await rm(folder, { recursive: true, force: true })
    },
  }
}

/** Waits until the server says "ready" in its pid file (its own protocol with pg_ctl), has ended, or 30 s are over. */
async function comesUp(child: ChildProcess, pidFile: string): Promise<{ up: boolean; words: string }> {
  let words = ''
  child.stderr?.setEncoding('utf8').on('data', (chunk: string) => (words = (words + chunk).slice(-4000)))
  const deadline = Date.now() + 30_000
  while (Date.now() < deadline && child.exitCode === null && child.signalCode === null) {
    if (existsSync(pidFile) && /^ready\s*$/m.test(readFileSync(pidFile, 'utf8'))) return { up: true, words }
    await new Promise((resolve) => setTimeout(resolve, 20))
  }
  child.kill('SIGQUIT')
  return { up: false, words }
}

/** The folder above this one, three times: the project's own. */
export const projectRoot = dirname(dirname(dirname(import.meta.dirname)))
