import { existsSync, readFileSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { DatabaseServer, makeDataFolder } from './database-server.js'
import { Opening, type Mode } from './opening.js'
import { InTheWay, projectRoot } from './postgres.js'
import { Processes } from './processes.js'
import { readSettings, welcome } from './settings.js'
import { say, tail, until } from './terminal.js'

/**
 * The part of ./docker-less-dev.sh that runs once Node, the packages and PostgreSQL are there:
 * `house.ts foreground | watch | up | down | reset`.
 */

/** How long one command waits for another one of the same folder, in milliseconds. */
const PATIENCE_MS = 180_000
const CLOSING_MS = 60_000

const stopping = new AbortController()
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => stopping.abort())

const settings = readSettings(projectRoot)
const data = await makeDataFolder(projectRoot)
const processes = new Processes(join(data, 'run'))

async function opening(mode: Mode, port = settings.port): Promise<Opening> {
  return new Opening(
    { ...settings, port },
    processes,
    await DatabaseServer.at(projectRoot),
    mode,
    stopping.signal,
  )
}

/** Runs `work` while no other command of this folder changes what runs here. */
async function alone<T>(work: () => Promise<T>): Promise<T> {
  const release = await processes.lock(PATIENCE_MS, (pid) =>
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
async function openOrUndo(house: Opening): Promise<void> {
  try {
    await house.open()
  } catch (error) {
    await house.close(house.startedDatabase)
    throw error
  }
}

function alreadyInForeground(): boolean {
  const launcher = processes.find('launcher')
  if (launcher === null) return false
  say(`\nThe house of this folder is open already, in the foreground of process ${launcher.pid}.`)
  return true
}

async function up(): Promise<void> {
  const house = await opening('built')
  await alone(async () => {
    if (alreadyInForeground()) return
    say('Opening the house in the background')
    await openOrUndo(house)
  })
  say(welcome(house.addresses()))
  say('  ./docker-less-dev.sh down closes it.')
}

async function stay(mode: Mode): Promise<void> {
  const house = await opening(mode)
  const mine = await alone(async () => {
    if (alreadyInForeground()) return false
    if (processes.find('api') !== null) {
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
    processes.write('launcher', process.pid, mode, {})
    try {
      await openOrUndo(house)
    } catch (error) {
      processes.forget('launcher')
      throw error
    }
    return true
  })
  say(welcome(house.addresses()))
  if (!mine) return
  say('  Ctrl-C closes it.\n')
  const unfollow = mode === 'watch' ? follow(['api', 'web']) : () => undefined
  const failed = await supervise()
  unfollow()
  say('\nClosing the house')
  await house.close(house.startedDatabase)
  processes.forget('launcher')
  if (failed !== null) throw new InTheWay(failed)
}

/** Waits for the person to stop the house. Returns why it had to close by itself, or null. */
async function supervise(): Promise<string | null> {
  while (!stopping.signal.aborted) {
    await until(500, () => stopping.signal.aborted)
    // `reset` in another window takes the server away for a moment and brings it back, lock in hand; the server is
    // looked for again after the lock, because it may have come back in between.
    const away =
      processes.find('api') === null && processes.find('lock') === null && processes.find('api') === null
    if (away && !stopping.signal.aborted)
      return `The server has ended by itself. Its last words, from ${join(data, 'log/api.log')}:\n\n${tail(join(data, 'log/api.log'))}`
  }
  return null
}

/** Shows what is added to the logs from now on. */
function follow(names: readonly string[]): () => void {
  const seen = new Map<string, number>()
  const look = () => {
    for (const name of names) {
      const log = join(data, 'log', `${name}.log`)
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

async function down(): Promise<void> {
  const launcher = processes.find('launcher')
  if (launcher !== null) {
    say(`Closing the house in the foreground of process ${launcher.pid}`)
    process.kill(launcher.pid, 'SIGTERM')
    await until(CLOSING_MS, () => processes.find('launcher') === null)
  }
  const house = await opening('built')
  const closed = await alone(() => house.close(true))
  say(closed || launcher !== null ? 'The house is closed.' : 'The house is closed already.')
}

async function reset(): Promise<void> {
  // An open house stays where it is, whatever port this call was told.
  const port = processes.find('api')?.ports['api'] ?? settings.port
  const house = await opening(processes.find('launcher')?.fingerprint === 'watch' ? 'watch' : 'built', port)
  await alone(async () => {
    say('Emptying the house and loading the demo again')
    const open = processes.find('api') !== null
    try {
      await house.refill()
    } finally {
      if (!open && house.startedDatabase) await house.close(true)
    }
  })
  say('The house holds the demo of today.')
}

const COMMANDS: Readonly<Record<string, () => Promise<void>>> = {
  foreground: () => stay('built'),
  watch: () => stay('watch'),
  up,
  down,
  reset,
}

try {
  const command = COMMANDS[process.argv[2] ?? '']
  if (command === undefined) throw new InTheWay(`usage: house.ts ${Object.keys(COMMANDS).join(' | ')}`)
  await command()
  process.exitCode = 0
} catch (error) {
  if (stopping.signal.aborted) {
    process.stderr.write('\nStopped.\n')
    process.exitCode = 130
  } else if (error instanceof InTheWay) {
    process.stderr.write(`\n${error.message}\n`)
    process.exitCode = 1
  } else throw error
}
