import { execFileSync } from 'node:child_process'
import { writeFileSync } from 'node:fs'
import { cpus, totalmem } from 'node:os'
import { join } from 'node:path'
import { administer } from '../dev/administer.js'
import { projectRoot } from '../dev/postgres.js'
import { startCluster, type Cluster } from '../test/cluster.js'
import { checkHouse } from './checks.js'
import { Child } from './child.js'
import type { Stock } from './fill.js'
import { GOALS, isMissed, markdown, table, type Reached } from './goals.js'
import { createHouse, openPeer, openProduct, runAll } from './houses.js'
import type { Heard, Listen } from './listeners.js'
import type { Burst } from './load.js'
import { PARTS, readOptions, USAGE, type Options } from './options.js'
import { countCosts, measureCalls } from './parts/calls.js'
import { measureCrash } from './parts/crash.js'
import { measureGrowth } from './parts/growth.js'
import { measureMemory } from './parts/memory.js'
import { measurePush } from './parts/push.js'
import { PRODUCTS } from './world.js'

/** The same for both sides. No checkpoint falls into one half of a pair and not into the other. */
const SETTINGS = ['shared_buffers=512MB', 'max_wal_size=8GB', 'checkpoint_timeout=1h', 'max_connections=100']

/** Screens that listen while calls are counted: one a room. */
const SCREENS = 8

/** Enough packages and cases for the longest run on a machine several times as fast as the slowest that we know. */
const STOCK: Stock = { cases: 60_000, unitsAProduct: 1_500, products: PRODUCTS, pastCalls: 10_000 }
const SMALLER_STOCK: Stock = { ...STOCK, cases: 20_000, unitsAProduct: 500 }

interface Result {
  readonly reached: Reached[]
  readonly costs: string[][]
  readonly checks: string[]
}

const say = (words: string): void => console.log(`  · ${words}`)

function build(): void {
  for (const name of ['packages/domain', 'packages/contracts', 'apps/api'])
    execFileSync('pnpm', ['run', 'build'], {
      cwd: join(projectRoot, name),
      stdio: ['ignore', 'ignore', 'inherit'],
    })
}

async function measure(cluster: Cluster, load: Child, listeners: Child, options: Options): Promise<Result> {
  const { parts } = options
  const reached: Reached[] = []
  const checks: string[] = []
  let costs: string[][] = []
  let wrong = 0
  const note = (found: { wrong: number; words: string }): void => {
    wrong += found.wrong
    checks.push(found.words)
    say(found.words)
  }

  say('filling two houses')
  const stock = options.measuredMs < 2_000 ? SMALLER_STOCK : STOCK
  const theirs = await openPeer(cluster, 'peer', stock)
  const ours = await openProduct('product', await createHouse(cluster, 'product', stock), stock)
  const sides = { ours, theirs }
  const both = [ours, theirs]
  for (const house of both)
    await load.ask('aim', { name: house.name, port: house.port, tokens: house.tokens(), ...stock })
  /** Access tokens run out while others are measured. */
  const signInAgain = (): Promise<void> => load.ask('tokens', { name: ours.name, tokens: ours.tokens() })
  const acknowledged = (name: string): Promise<string[]> => load.ask<string[]>('acknowledged', name)

  try {
    if (parts.has('calls')) {
      for (const { name, speaks, port, tokens } of both) {
        const wish: Listen = { name, speaks, port, tokens: tokens(), count: SCREENS }
        await listeners.ask('listen', wish)
      }
      say('warming up')
      for (const { name, url } of both) {
        const wish: Burst = { aim: name, atOnce: 8, warmMs: 0, measuredMs: 2_000 }
        await load.ask('burst', wish)
        await runAll(url, ['VACUUM (ANALYZE)'])
      }
      say('calls at once: 1, 8, 32')
      reached.push(...(await measureCalls(load, sides, options)))
      costs = await countCosts(load, both, async (name) => (await acknowledged(name)).length)
      const calls = (await acknowledged(ours.name)).map((id) => ({ id, tappedMs: 0 }))
      const { lost, doubled, outOfOrder } = await listeners.ask<Heard>('heard', { name: ours.name, calls })
      note({
        wrong: lost + doubled,
        words: `${calls.length} events to ${SCREENS} screens: ${lost} lost, ${doubled} doubled, ${outOfOrder} out of order`,
      })
      for (const { name } of both) await listeners.ask('leave', name)
    }
    if (parts.has('push'))
      for (const count of options.audiences) {
        say(`tap to listener, ${count} listeners`)
        await signInAgain()
        const pushed = await measurePush(load, listeners, sides, count, options)
        reached.push(...pushed.reached)
        note(pushed)
      }
    if (parts.has('calls') || parts.has('push'))
      note(await checkHouse(ours.url, await acknowledged(ours.name)))
    if (parts.has('crash')) {
      say('killing the database')
      await signInAgain()
      note(await measureCrash(load, ours))
    }
    await theirs.close()
    if (parts.has('growth')) {
      say('filling a small, a full and an old house')
      reached.push(...(await measureGrowth(cluster, load, options)))
    }
    if (parts.has('memory')) {
      say('memory of a listener')
      reached.push(await measureMemory(listeners, ours, options.memoryListeners))
    }
  } finally {
    for (const house of both) await house.close()
  }
  reached.push({ goal: GOALS.broken, value: wrong, note: 'see below' })
  return { reached, costs, checks }
}

async function report(
  cluster: Cluster,
  { reached, costs, checks }: Result,
  options: Options,
): Promise<string> {
  const [version] = (await administer(cluster.url(), 'SHOW server_version')) as [{ server_version: string }]
  const machine = `${cpus().length} cores, ${Math.round(totalmem() / 2 ** 30)} GiB, PostgreSQL ${version.server_version.split(' ')[0]}, Node ${process.versions.node}`
  const costTable =
    costs.length > 0
      ? `\n\nWhat one call costs, 8 at once:\n\n${markdown(['', 'transactions', 'WAL flushes', 'WAL records', 'WAL kB', 'CPU ms in the server', 'CPU ms in its database sessions'], costs)}`
      : ''
  return `# Last measurement

${new Date().toISOString().slice(0, 10)}, ${machine}; load, listeners and database on the same machine; commits are durable.
Ratios are Bellpull over a minimal server that does the same work, the median of ${options.pairs} alternating pairs. Absolute numbers are only for orientation: they drift.

${table(reached)}${costTable}

What was looked for after the load:

${checks.map((words) => `- ${words}`).join('\n')}
`
}

async function run(options: Options): Promise<boolean> {
  if (options.build) {
    say('building')
    build()
  }
  const cluster = await startCluster({ durable: true, settings: SETTINGS })
  const load = Child.start('load.ts')
  const listeners = Child.start('listeners.ts')
  try {
    const result = await measure(cluster, load, listeners, options)
    const text = await report(cluster, result, options)
    console.log(`\n${text}`)
    // Parts alone, or a short try, do not replace a measurement.
    const isWhole = options.parts.size === PARTS.length && options.pushCalls >= 1_000
    if (isWhole) writeFileSync(join(import.meta.dirname, 'RESULT.md'), text)
    return !result.reached.some(isMissed)
  } finally {
    await load.stop()
    await listeners.stop()
    await cluster.stop()
  }
}

const options = readOptions(process.argv.slice(2))
if (options === 'help') console.log(USAGE)
else process.exit((await run(options)) ? 0 : 1)
