import { expect, vi } from 'vitest'
import type { TestApi } from './app.js'

/** A transaction of somebody else that holds what the test says, until it is let go. */
export interface Rival {
  /** Gives up: what it has changed never happened. */
  letGo(): Promise<void>
  /** Comes to its end: what it has changed stands. */
  commit(): Promise<void>
}

/**
 * Makes a race certain: what is asked meanwhile queues behind this lock. Let go in every case, or the test's
 * own database waits for it.
 *
 * @param lock a statement that locks, such as `SELECT 1 FROM room WHERE id = $1 FOR UPDATE`.
 */
export async function holdLock(api: TestApi, lock: string, values: unknown[]): Promise<Rival> {
  const runner = api.dataSource.createQueryRunner()
  await runner.connect()
  await runner.startTransaction()
  await runner.query(lock, values)
  let held = true
  const end = async (how: 'commitTransaction' | 'rollbackTransaction'): Promise<void> => {
    if (!held) return
    held = false
    await runner[how]()
    await runner.release()
  }
  return { letGo: () => end('rollbackTransaction'), commit: () => end('commitTransaction') }
}

/** Until so many of this database's connections wait for a lock. */
export const untilWaiting = (api: TestApi, count: number): Promise<void> =>
  vi.waitFor(
    async () => {
      const [row] = await api.rows<{ n: number }>(
        `SELECT count(*)::int AS n FROM pg_stat_activity WHERE datname = current_database() AND wait_event_type = 'Lock'`,
      )
      expect(row?.n).toBe(count)
    },
    { timeout: 10_000, interval: 20 },
  )
