import { setTimeout as wait } from 'node:timers/promises'
import { readFileSync } from 'node:fs'
import { administer } from '../../dev/administer.js'
import type { Child } from '../child.js'
import { checkHouse } from '../checks.js'
import type { House } from '../houses.js'
import type { Stubborn } from '../load.js'

const AT_ONCE = 8
const KILLS = 2
/** Calls between two kills. */
const CALLS_BETWEEN = 200
/** Recovery reads all that was written since the last checkpoint; this long is a failure. */
const COMES_BACK_MS = 60_000

/**
 * Kills the database twice under load, as a machine that fails would: PostgreSQL throws away all that is in memory
 * and recovers from its log. Every tap is sent again until it is acknowledged; then everything must be there, once.
 */
export async function measureCrash(load: Child, house: House): Promise<{ wrong: number; words: string }> {
  const ids = (): Promise<string[]> => load.ask<string[]>('acknowledged', house.name)
  const running = load.ask<Stubborn>('stubborn', {
    aim: house.name,
    atOnce: AT_ONCE,
    giveUpMs: COMES_BACK_MS,
  })
  const [{ taps, again }] = await Promise.all([
    running,
    killUnderLoad(load, house.url, async () => (await ids()).length),
  ])
  const { wrong, words } = await checkHouse(house.url, await ids())
  return { wrong, words: `database killed ${KILLS} times under ${taps} taps, ${again} sent again; ${words}` }
}

async function killUnderLoad(load: Child, url: string, count: () => Promise<number>): Promise<void> {
  try {
    for (let kill = 0; kill <= KILLS; kill += 1) {
      const wanted = (await count()) + CALLS_BETWEEN
      const deadline = Date.now() + COMES_BACK_MS
      while ((await count()) < wanted) {
        if (Date.now() > deadline) throw new Error('calls did not go on after the database was killed')
        await wait(100)
      }
      if (kill < KILLS) await killDatabase(url)
    }
  } finally {
    await load.ask('enough')
  }
}

/** Kills one server process of ours; the others then cannot trust their memory, and all start anew from the log. */
async function killDatabase(url: string): Promise<void> {
  const [row] = (await administer(
    url,
    `SELECT pid FROM pg_stat_activity WHERE datname = current_database() AND pid <> pg_backend_pid() LIMIT 1`,
  )) as [{ pid: number } | undefined]
  if (!row) throw new Error('nobody is connected to the database that is to be killed')
  // The number is of a moment ago: make sure that it still is what it was.
  if (!readFileSync(`/proc/${row.pid}/comm`, 'utf8').startsWith('postgres'))
    throw new Error('not a server process')
  process.kill(row.pid, 'SIGKILL')
}
