import { spawn, type ChildProcess } from 'node:child_process'
import { closeSync, mkdirSync, openSync } from 'node:fs'
import { join } from 'node:path'
import { freePort, projectRoot } from '../apps/api/dev/postgres.js'
import { answers, runLogged, until } from '../apps/api/dev/terminal.js'
import { createDatabase } from '../apps/api/test/cluster.js'

/** What the set-up of a run hands to its workers through the environment. */
export const SHARED = { adminUrl: 'BELLPULL_E2E_ADMIN_URL', template: 'BELLPULL_E2E_TEMPLATE' } as const

const READY_MS = 30_000
const API = join(projectRoot, 'apps/api')
const LOGS = join(projectRoot, '.data/log')

/** One house for one journey: its own database with the demo in it, its own server, its own mail catcher. */
export interface House {
  /** Where server and pages answer, as in `http://127.0.0.1:40123`. */
  readonly url: string
  readonly databaseUrl: string
  /** Where the caught mail is read; `/messages.json` for programs. */
  readonly mailUrl: string
  /** Kills the server without a word, as a power cut would, and starts it again at the same address. */
  restartServer(): Promise<void>
  stopServer(): Promise<void>
  startServer(): Promise<void>
  close(): Promise<void>
}

function environment(databaseUrl: string, port: number, smtpPort: number): NodeJS.ProcessEnv {
  return {
    ...process.env,
    NODE_ENV: 'production',
    BELLPULL_HOST: '127.0.0.1',
    BELLPULL_PORT: String(port),
    BELLPULL_DATABASE_URL: databaseUrl,
    BELLPULL_TOKEN_SECRET: 'only-for-journeys-only-for-journeys-only',
    BELLPULL_SMTP_URL: `smtp://127.0.0.1:${smtpPort}`,
    BELLPULL_MAIL_FROM: 'stores@larchwater.example',
    BELLPULL_DEMO: '1',
    BELLPULL_HOUSE_NAME: 'Larchwater General',
    BELLPULL_HOUSE_ZONE: 'UTC',
    BELLPULL_WEB_DIR: join(projectRoot, 'apps/web/dist'),
    BELLPULL_LOG_LEVEL: 'warn',
  }
}

/** Brings an empty database up to date and loads the demo into it. */
export async function fillHouse(databaseUrl: string): Promise<void> {
  mkdirSync(LOGS, { recursive: true })
  const env = environment(databaseUrl, 1, 1)
  for (const script of ['migrate', 'demo/seed']) {
    const log = join(LOGS, `journeys-${script.replace('/', '-')}.log`)
    await runLogged({ command: process.execPath, args: [`dist/${script}.js`], cwd: API, env, log })
  }
}

/** Opens a house of its own for one journey; ready when this returns. */
export async function openHouse(): Promise<House> {
  const adminUrl = process.env[SHARED.adminUrl]
  const template = process.env[SHARED.template]
  if (adminUrl === undefined || template === undefined)
    throw new Error('the set-up of the run has not been here')
  const database = await createDatabase(adminUrl, template)
  const [port, smtpPort, mailPort] = [await freePort(), await freePort(), await freePort()]
  const url = `http://127.0.0.1:${port}`
  const mailUrl = `http://127.0.0.1:${mailPort}`
  const env = environment(database.url, port, smtpPort)

  const mailArgs = ['--import', 'tsx', 'apps/api/dev/mail-catcher.ts', String(smtpPort), String(mailPort)]
  const mail = program(mailArgs, projectRoot, env)
  let server: ChildProcess | null = null

  async function startServer(): Promise<void> {
    server = program(['dist/main.js'], API, env)
    await answering(server, `${url}/api/v1/health/ready`)
  }
  async function endServer(signal: NodeJS.Signals): Promise<void> {
    if (server !== null) await end(server, signal)
    server = null
  }
  async function close(): Promise<void> {
    await endServer('SIGTERM')
    await end(mail, 'SIGTERM')
    await database.drop()
  }

  try {
    await Promise.all([startServer(), answering(mail, `${mailUrl}/`)])
  } catch (error) {
    await close()
    throw error
  }
  return {
    url,
    databaseUrl: database.url,
    mailUrl,
    startServer,
    stopServer: () => endServer('SIGTERM'),
    async restartServer() {
      await endServer('SIGKILL')
      await startServer()
    },
    close,
  }
}

/** Starts one program of a house. What it says is added to one log for all journeys. */
function program(args: readonly string[], cwd: string, env: NodeJS.ProcessEnv): ChildProcess {
  const log = openSync(join(LOGS, 'journeys-houses.log'), 'a')
  const child = spawn(process.execPath, args, { cwd, env, stdio: ['ignore', log, log] })
  closeSync(log)
  const kill = () => child.kill('SIGKILL')
  process.once('exit', kill)
  child.once('exit', () => process.removeListener('exit', kill))
  return child
}

const living = (child: ChildProcess) => child.exitCode === null && child.signalCode === null

async function answering(child: ChildProcess, address: string): Promise<void> {
  let ready = false
  await until(READY_MS, async () => {
    ready = await answers(address)
    return ready || !living(child)
  })
  if (!ready) throw new Error(`${address} does not answer; see journeys-houses.log in ${LOGS}`)
}

async function end(child: ChildProcess, signal: NodeJS.Signals): Promise<void> {
  if (!living(child)) return
  child.kill(signal)
  if (await until(10_000, () => !living(child))) return
  child.kill('SIGKILL')
  await until(5000, () => !living(child))
}
