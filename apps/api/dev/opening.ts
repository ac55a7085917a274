import { createHash } from 'node:crypto'
import { existsSync } from 'node:fs'
import { join } from 'node:path'
import { build } from './build.js'
import type { DatabaseServer } from './database-server.js'
import { DISTANCE, following, freeOrOther, holderOf, isFree } from './ports.js'
import { InTheWay } from './postgres.js'
import { identityOf, type ProcessName, type Processes, type ProcessRecord } from './processes.js'
import { apiEnvironment, type Settings } from './settings.js'
import { answers, runLogged, say, step, tail, until } from './terminal.js'

/** How long a program may take to answer after its start, in milliseconds. */
const READY_MS = 60_000

/** Built output, or sources that are read anew at every change. */
export type Mode = 'built' | 'watch'

/** Brings the parts of one house up in their order, and down in the reverse one. */
export class Opening {
  private databaseStarted = false

  constructor(
    readonly settings: Settings,
    readonly processes: Processes,
    readonly database: DatabaseServer,
    private readonly mode: Mode,
    private readonly signal: AbortSignal,
  ) {}

  private log(name: string): string {
    return join(this.settings.data, 'log', `${name}.log`)
  }

  /** Opens the house, part by part; what runs already and has not changed is left alone. */
  async open(): Promise<void> {
    await this.refuseTakenPort()
    const hash = await this.build()
    const database = await this.openDatabase()
    const smtpPort = await this.openMail()
    const env = this.environment(database.url, smtpPort)
    const fingerprint = fingerprintOf(this.mode, hash, env)
    if (this.processes.find('api')?.fingerprint === fingerprint && (await this.isReady())) {
      say('  · the server runs already')
    } else {
      await this.processes.stop('api')
      await this.fill(env)
      await this.openApi(env, fingerprint)
    }
    if (this.mode === 'watch') await this.openWeb(env)
  }

  /** Throws everything in the house away and loads the demo again; the server is up afterwards if it was before. */
  async refill(): Promise<void> {
    // Before anything is thrown away: a build that fails must leave the house as it was.
    await this.build()
    const wasOpen = await this.processes.stop('api')
    const database = await this.openDatabase()
    await step('emptying the house', () => this.database.empty(database.port))
    if (wasOpen) await this.open()
    else await this.fill(this.environment(database.url, following(this.settings.port, DISTANCE.smtp)))
  }

  private async build(): Promise<string> {
    return this.mode === 'built' ? await build(this.settings.root, this.log('build'), this.signal) : 'watch'
  }

  private environment(databaseUrl: string, smtpPort: number): NodeJS.ProcessEnv {
    const mode = this.mode === 'built' ? 'production' : 'development'
    return apiEnvironment(this.settings, { databaseUrl, smtpPort, mode })
  }

  /** Closes what runs, but for the processes numbered in `spare`; the database only when `database` says so. */
  async close(database: boolean, spare: readonly number[] = []): Promise<boolean> {
    let closed = false
    for (const name of ['web', 'api', 'mail'] as const) {
      const pid = this.processes.find(name)?.pid
      if (pid === undefined) this.processes.forget(name)
      else if (!spare.includes(pid))
        closed = await step(`stopping ${WORDS[name]}`, () => this.processes.stop(name))
    }
    if (database && (await this.database.port()) !== null)
      closed = await step('stopping PostgreSQL', () => this.database.stop())
    return closed
  }

  /** Did PostgreSQL start for this opening, rather than run already? */
  get startedDatabase(): boolean {
    return this.databaseStarted
  }

  private get houseUrl(): string {
    return `http://127.0.0.1:${this.settings.port}`
  }

  private isReady(): Promise<boolean> {
    return answers(`${this.houseUrl}/api/v1/health/ready`)
  }

  addresses(): [string, string][] {
    const page = (port: number | undefined) => `http://127.0.0.1:${port ?? '?'}`
    const web = this.processes.find('web')?.ports['page']
    const mail = this.processes.find('mail')?.ports['page']
    const house = page(this.processes.find('api')?.ports['api'])
    return [
      ...(web === undefined
        ? [['Bellpull', house]]
        : [
            ['Bellpull, live sources', page(web)],
            ['API', house],
          ]),
      ['Mail that it sends', page(mail)],
      ['Logs', join(this.settings.data, 'log')],
    ] as [string, string][]
  }

  private async refuseTakenPort(): Promise<void> {
    const { port } = this.settings
    const running = this.processes.find('api')
    if (running?.ports['api'] === port || (await isFree(port))) return
    const holder = holderOf(port)
    throw new InTheWay(
      `Port ${port} is taken by ${holder ?? 'another program'}. Stop that, or choose another port: BELLPULL_PORT=${port + 1} ./docker-less-dev.sh`,
    )
  }

  private postgresPort(): number {
    return this.settings.postgresPort ?? following(this.settings.port, DISTANCE.postgres)
  }

  private async openDatabase(): Promise<{ port: number; url: string }> {
    const running = await this.database.port()
    if (running !== null) say(`  · PostgreSQL runs already on port ${running}`)
    const start = () => this.database.start(this.postgresPort())
    const { port, started } = running === null ? await step('starting PostgreSQL', start) : await start()
    this.databaseStarted ||= started
    return { port, url: this.database.url(port) }
  }

  private async openMail(): Promise<number> {
    const running = this.processes.find('mail')
    if (running?.ports['smtp'] !== undefined) {
      say('  · the mail catcher runs already')
      return running.ports['smtp']
    }
    const { port } = this.settings
    const smtp = await freeOrOther(following(port, DISTANCE.smtp))
    const page = await freeOrOther(following(port, DISTANCE.mailPage))
    const args = ['--import', 'tsx', 'apps/api/dev/mail-catcher.ts', String(smtp), String(page)]
    const program = { args, cwd: this.settings.root, env: process.env, log: this.log('mail') }
    await step('starting the mail catcher', async () => {
      const record = this.processes.start('mail', program, 'mail', { smtp, page })
      await this.awaitAnswer('mail', record, () => answers(`http://127.0.0.1:${page}/`))
    })
    return smtp
  }

  /** Brings the tables up to date, and the demo into a house that is empty. */
  private async fill(env: NodeJS.ProcessEnv): Promise<void> {
    for (const [title, script] of [
      ['bringing the tables up to date', 'migrate'],
      ['seeding the demo where the house is empty', 'demo/seed'],
    ] as const) {
      const log = this.log(script.replace('demo/', ''))
      const errand = { command: process.execPath, args: this.script(script), cwd: this.api, env, log }
      await step(title, () => runLogged({ ...errand, signal: this.signal }))
      say(`    ${tail(log, 1)}`)
    }
  }

  private get api(): string {
    return join(this.settings.root, 'apps/api')
  }

  private script(name: string): string[] {
    return this.mode === 'built'
      ? [`dist/${name}.js`]
      : ['--import', 'tsx', '--conditions=source', `src/${name}.ts`]
  }

  private async openApi(env: NodeJS.ProcessEnv, fingerprint: string): Promise<void> {
    const tsx = join(this.settings.root, 'node_modules/tsx/dist/cli.mjs')
    const watch = [tsx, 'watch', '--clear-screen=false', '--conditions=source', 'src/main.ts']
    const args = this.mode === 'built' ? this.script('main') : watch
    const program = { args, cwd: this.api, env, log: this.log('api') }
    await step('starting the server', async () => {
      const record = this.processes.start('api', program, fingerprint, { api: this.settings.port })
      await this.awaitAnswer('api', record, () => this.isReady())
    })
  }

  private async openWeb(env: NodeJS.ProcessEnv): Promise<void> {
    if (this.processes.find('web') !== null) return
    const page = await freeOrOther(following(this.settings.port, DISTANCE.web))
    const cwd = join(this.settings.root, 'apps/web')
    const vite = join(cwd, 'node_modules/vite/bin/vite.js')
    if (!existsSync(vite))
      throw new InTheWay(`${vite} is missing; run ./docker-less-dev.sh again to install the packages.`)
    const args = [
      vite,
      '--host',
      '127.0.0.1',
      '--port',
      String(page),
      '--strictPort',
      '--clearScreen',
      'false',
    ]
    const program = { args, cwd, env: { ...env, BELLPULL_API: this.houseUrl }, log: this.log('web') }
    await step('starting the pages', async () => {
      const record = this.processes.start('web', program, 'web', { page })
      await this.awaitAnswer('web', record, () => answers(`http://127.0.0.1:${page}/`))
    })
  }

  private async awaitAnswer(
    name: ProcessName,
    record: ProcessRecord,
    question: () => Promise<boolean>,
  ): Promise<void> {
    const living = () => identityOf(record.pid) === record.identity
    let ready = false
    await until(READY_MS, async () => {
      this.signal.throwIfAborted()
      ready = await question()
      return ready || !living()
    })
    if (ready && living()) return
    const why = living() ? `does not answer after ${READY_MS / 1000} s` : 'has ended'
    throw new InTheWay(`${WORDS[name]} ${why}. The end of ${this.log(name)}:\n\n${tail(this.log(name))}`)
  }
}

const WORDS: Readonly<Record<ProcessName, string>> = {
  launcher: 'the launcher',
  api: 'the server',
  web: 'the pages',
  mail: 'the mail catcher',
}

/** One value for what a server was started with; our own variables are enough, the rest of the environment is noise. */
function fingerprintOf(mode: Mode, buildHash: string, env: NodeJS.ProcessEnv): string {
  const own = Object.entries(env).filter(([name]) => name.startsWith('BELLPULL_'))
  return createHash('sha256')
    .update(JSON.stringify([mode, buildHash, own.sort()]))
    .digest('hex')
}
