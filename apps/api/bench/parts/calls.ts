import { administer } from '../../dev/administer.js'
import { compare, GOALS, type Reached } from '../goals.js'
import { cpuMsOf, type House } from '../houses.js'
import type { Child } from '../child.js'
import type { Burst, BurstResult } from '../load.js'
import type { Options } from '../options.js'

/** Product and peer, measured by turns: neither is always the first. */
export async function inPairs<T>(
  pairs: number,
  sides: { ours: House; theirs: House },
  half: (house: House) => Promise<T>,
): Promise<{ ours: T; theirs: T }[]> {
  const results: { ours: T; theirs: T }[] = []
  for (let n = 0; n < pairs; n += 1) {
    if (n % 2 === 0) {
      const theirs = await half(sides.theirs)
      results.push({ theirs, ours: await half(sides.ours) })
    } else {
      const ours = await half(sides.ours)
      results.push({ ours, theirs: await half(sides.theirs) })
    }
  }
  return results
}

const rates = (ours: number, theirs: number): string => `${ours.toFixed(0)}/s, peer ${theirs.toFixed(0)}/s`
export const times = (ours: number, theirs: number): string =>
  `${ours.toFixed(2)} ms, peer ${theirs.toFixed(2)} ms`

/** Calls made one, eight and thirty-two at once. */
export async function measureCalls(
  load: Child,
  sides: { ours: House; theirs: House },
  { pairs, measuredMs, warmMs }: Options,
): Promise<Reached[]> {
  const burst = (atOnce: number) =>
    inPairs(pairs, sides, ({ name }) => {
      const wish: Burst = { aim: name, atOnce, warmMs, measuredMs }
      return load.ask<BurstResult>('burst', wish)
    })
  const [one, eight, many] = [await burst(1), await burst(8), await burst(32)]
  return [
    compare(GOALS.rate8, eight, (half) => half.callsPerSecond, rates),
    compare(GOALS.rate32, many, (half) => half.callsPerSecond, rates),
    compare(GOALS.p50, one, (half) => half.p50Ms, times),
    compare(GOALS.p99, eight, (half) => half.p99Ms, times),
  ]
}

interface Counters {
  readonly transactions: number
  readonly walBytes: number
  readonly walRecords: number
  readonly flushes: number
  readonly sessions: number[]
}

const COUNTERS = `
SELECT xact_commit::float8 AS transactions, wal_bytes::float8 AS "walBytes", wal_records::float8 AS "walRecords",
       wal_sync::float8 AS flushes,
       (SELECT array_agg(pid) FROM pg_stat_activity a WHERE a.datname = current_database() AND pid <> pg_backend_pid()) AS sessions
  FROM pg_stat_database, pg_stat_wal WHERE datname = current_database()`

/** What one call costs, counted rather than timed: such numbers hardly drift. One row for each side. */
export async function countCosts(
  load: Child,
  houses: readonly House[],
  acknowledged: (name: string) => Promise<number>,
): Promise<string[][]> {
  const rows: string[][] = []
  for (const house of houses) {
    const read = async (): Promise<Counters & { cpuMs: number; databaseMs: number; calls: number }> => {
      // Backends hand in what they counted only when they have been idle for a moment.
      await new Promise((resolve) => setTimeout(resolve, 1_500))
      const [counters] = (await administer(house.url, COUNTERS)) as [Counters]
      const databaseMs = counters.sessions.reduce((sum, pid) => sum + cpuMsOf(pid), 0)
      return { ...counters, databaseMs, cpuMs: cpuMsOf(house.pid), calls: await acknowledged(house.name) }
    }
    const before = await read()
    const wish: Burst = { aim: house.name, atOnce: 8, warmMs: 0, measuredMs: 1_500 }
    await load.ask('burst', wish)
    const after = await read()
    const calls = after.calls - before.calls
    const each = (value: (counters: typeof before) => number): number =>
      (value(after) - value(before)) / calls
    rows.push([
      house.speaks === 'plain' ? 'peer' : 'Bellpull',
      each((c) => c.transactions).toFixed(2),
      each((c) => c.flushes).toFixed(2),
      each((c) => c.walRecords).toFixed(0),
      (each((c) => c.walBytes) / 1000).toFixed(1),
      each((c) => c.cpuMs).toFixed(2),
      each((c) => c.databaseMs).toFixed(2),
    ])
  }
  return rows
}
