import { setTimeout as wait } from 'node:timers/promises'
import { readFileSync } from 'node:fs'
import { administer } from '../../dev/administer.js'
import type { Child } from '../child.js'
import { checkHouse } from '../checks.js'
import type { House } from '../houses.js'

const AT_ONCE = 8
const RUN_MS = 6_000
const KILLS_AT_MS = [1_500, 3_500]
const GIVE_UP_MS = 30_000

/**
 * Kills the database twice under load, as a machine that fails would: PostgreSQL throws away all that is in memory
 * and recovers from its log. Every tap is sent again until it is acknowledged; then everything must be there, once.
 */
export async function measureCrash(load: Child, house: House): Promise<{ wrong: number; words: string }> {
  const running = load.ask<{ taps: number; again: number }>('stubborn', {
    aim: house.name,
    atOnce: AT_ONCE,
    forMs: RUN_MS,
    giveUpMs: GIVE_UP_MS,
  })
  const start = Date.now()
  for (const at of KILLS_AT_MS) {
    await wait(Math.max(0, start + at - Date.now()))
    await killDatabase(house.url)
  }
  const { taps, again } = await running
  const { wrong, words } = await checkHouse(house.url, await load.ask<string[]>('acknowledged', house.name))
  return {
    wrong,
    words: `database killed ${KILLS_AT_MS.length} times under ${taps} taps, ${again} of them sent again; ${words}`,
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
