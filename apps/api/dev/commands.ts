import { existsSync, readFileSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { DatabaseServer } from './database-server.js'
import { Opening, type Mode } from './opening.js'
import { InTheWay } from './postgres.js'
import type { Processes } from './processes.js'
import { welcome, type Settings } from './settings.js'
import { say, tail, until } from './terminal.js'

/** How long one command waits for another one of the same folder, in milliseconds. */
const PATIENCE_MS = 180_000
const CLOSING_MS = 60_000

/** What a person may ask of the house of this folder. */
export class Commands {
  constructor(
    private readonly settings: Settings,
    private readonly processes: Processes,
    private readonly stopping: AbortSignal,
  ) {}

  private async opening(mode: Mode, port = this.settings.port): Promise<Opening> {
    return new Opening(
      { ...this.settings, port },
      this.processes,
      await DatabaseServer.at(this.settings.root),
      mode,
      this.stopping,
    )
  }

  /** Runs `work` while no other command of this folder changes what runs here. */
  private async alone<T>(work: () => Promise<T>): Promise<T> {
    const release = await this.processes.lock(PATIENCE_MS, (pid) =>
      say(`  … waiting for another command of this folder (process ${pid})`),
    )
    if (release === null)
      throw new InTheWay('Another command of this folder is still at work. Try again when it is done.')
    try {
      return await work()
    } finally {
      release()
    }
  }

  /** Opens the house; what this very call started is stopped again when it does not come up. */
  private async openOrUndo(house: Opening): Promise<void> {
    const before = this.processes.living()
    try {
      await house.open()
    } catch (error) {
      await house.close(house.startedDatabase, before)
      throw error
    }
  }

  private alreadyInForeground(): boolean {
    const launcher = this.processes.find('launcher')
    if (launcher === null) return false
    say(`\nThe house of this folder is open already, in the foreground of process ${launcher.pid}.`)
    return true
  }

  async up(): Promise<void> {
    const house = await this.opening('built')
    await this.alone(async () => {
      if (this.alreadyInForeground()) return
      say('Opening the house in the background')
      await this.openOrUndo(house)
    })
    say(welcome(house.addresses()))
    say('  ./docker-less-dev.sh down closes it.')
  }

  async stay(mode: Mode): Promise<void> {
    const house = await this.opening(mode)
    const mine = await this.alone(async () => {
      if (this.alreadyInForeground()) return false
      if (this.processes.find('api') !== null) {
        if (mode === 'watch')
          throw new InTheWay(
            'The house of this folder is open in the background. Close it first: ./docker-less-dev.sh down',
          )
        say(
          '\nThe house of this folder is open already, in the background; ./docker-less-dev.sh down closes it.',
        )
        return false
      }
      say('Opening the house')
      this.processes.write('launcher', process.pid, mode, {})
      try {
        await this.openOrUndo(house)
      } catch (error) {
        this.processes.forget('launcher')
        throw error
      }
      return true
    })
    say(welcome(house.addresses()))
    if (!mine) return
    say('  Ctrl-C closes it.\n')
    const unfollow = mode === 'watch' ? this.follow(['api', 'web']) : () => undefined
    const failed = await this.supervise()
    unfollow()
    say('\nClosing the house')
    await house.close(house.startedDatabase)
    this.processes.forget('launcher')
    if (failed !== null) throw new InTheWay(failed)
  }

  /** Waits for the person to stop the house. Returns why it had to close by itself, or null. */
  private async supervise(): Promise<string | null> {
    while (!this.stopping.aborted) {
      await until(500, () => this.stopping.aborted)
      // `reset` in another window takes the server away for a moment and brings it back, lock in hand; the server is
      // looked for again after the lock, because it may have come back in between.
      const away =
        this.processes.find('api') === null &&
        this.processes.find('lock') === null &&
        this.processes.find('api') === null
      if (away && !this.stopping.aborted)
        return `The server has ended by itself. Its last words, from ${join(this.settings.data, 'log/api.log')}:\n\n${tail(join(this.settings.data, 'log/api.log'))}`
    }
    return null
  }

  /** Shows what is added to the logs from now on. */
  private follow(names: readonly string[]): () => void {
    const seen = new Map<string, number>()
    const look = () => {
      for (const name of names) {
        const log = join(this.settings.data, 'log', `${name}.log`)
        if (!existsSync(log)) continue
        const { size } = statSync(log)
        const from = seen.get(log)
        if (from !== undefined && size > from) process.stdout.write(readFileSync(log).subarray(from))
        seen.set(log, size)
      }
    }
    look()
    const timer = setInterval(look, 300)
    return () => clearInterval(timer)
  }

  async down(): Promise<void> {
    const launcher = this.processes.find('launcher')
    if (launcher !== null) {
      say(`Closing the house in the foreground of process ${launcher.pid}`)
      process.kill(launcher.pid, 'SIGTERM')
      await until(CLOSING_MS, () => this.processes.find('launcher') === null)
    }
    const house = await this.opening('built')
    const closed = await this.alone(() => house.close(true))
    say(closed || launcher !== null ? 'The house is closed.' : 'The house is closed already.')
  }

  async reset(): Promise<void> {
    // An open house stays where it is, whatever port this call was told.
    const port = this.processes.find('api')?.ports['api'] ?? this.settings.port
    const house = await this.opening(
      this.processes.find('launcher')?.fingerprint === 'watch' ? 'watch' : 'built',
      port,
    )
    await this.alone(async () => {
      say('Emptying the house and loading the demo again')
      const open = this.processes.find('api') !== null
      try {
        await house.refill()
      } finally {
        if (!open && house.startedDatabase) await house.close(true)
      }
    })
    say('The house holds the demo of today.')
  }
}
