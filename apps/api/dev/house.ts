import { join } from 'node:path'
import { Commands } from './commands.js'
import { makeDataFolder } from './database-server.js'
import { InTheWay, projectRoot } from './postgres.js'
import { Processes } from './processes.js'
import { readSettings } from './settings.js'

/**
 * The part of ./docker-less-dev.sh that runs once Node, the packages and PostgreSQL are there:
 * `house.ts foreground | watch | up | down | reset`.
 */

const stopping = new AbortController()
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => stopping.abort())
// A closed window takes the terminal away; closing the house must go on without it.
for (const stream of [process.stdout, process.stderr]) stream.on('error', () => undefined)

async function run(name: string): Promise<void> {
  const settings = readSettings(projectRoot)
  const data = await makeDataFolder(projectRoot)
  const commands = new Commands(settings, new Processes(join(data, 'run')), stopping.signal)
  const known: Readonly<Record<string, () => Promise<void>>> = {
    foreground: () => commands.stay('built'),
    watch: () => commands.stay('watch'),
    up: () => commands.up(),
    down: () => commands.down(),
    reset: () => commands.reset(),
  }
  const command = known[name]
  if (command === undefined) throw new InTheWay(`usage: house.ts ${Object.keys(known).join(' | ')}`)
  await command()
}

try {
  await run(process.argv[2] ?? '')
  process.exit(0)
} catch (error) {
  if (!stopping.signal.aborted && !(error instanceof InTheWay)) throw error
  process.stderr.write(error instanceof InTheWay ? `\n${error.message}\n` : '\nStopped.\n')
  process.exit(stopping.signal.aborted ? 130 : 1)
}
