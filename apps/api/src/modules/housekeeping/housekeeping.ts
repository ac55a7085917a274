import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { KEY_LIVES_MS } from '../../platform/http/idempotency.js'
import type { Logger } from '../../platform/log.js'

/** How often the house is swept, in milliseconds. */
const EVERY_MS = 3_600_000

/** Failed attempts, and sessions that are over with their tokens, are kept this long for a look back. */
const LOOK_BACK_MS = 30 * 24 * 3_600_000

/**
 * Throws away what has had its time: answers kept for repeated requests, failed attempts, sessions long over.
 * Nothing of a case is ever among it. Several processes may sweep at once.
 *
 * @returns how many rows went, by table.
 */
export async function sweep(database: Database, now: Date): Promise<Record<string, number>> {
  const before = (ms: number): Date => new Date(now.getTime() - ms)
  const statements = {
    idempotency_key: ['DELETE FROM idempotency_key WHERE created_at <= $1', before(KEY_LIVES_MS)],
    sign_in_failure: ['DELETE FROM sign_in_failure WHERE at <= $1', before(LOOK_BACK_MS)],
    refresh_token: [
      'DELETE FROM refresh_token t USING session s WHERE s.id = t.session_id AND s.expires_at <= $1',
      before(LOOK_BACK_MS),
    ],
    session: [
      'DELETE FROM session s WHERE s.expires_at <= $1 AND NOT EXISTS (SELECT FROM refresh_token t WHERE t.session_id = s.id)',
      before(LOOK_BACK_MS),
    ],
  } as const
  const gone: Record<string, number> = {}
  for (const [table, [text, limit]] of Object.entries(statements))
    gone[table] = (await database.query({ text, values: [limit] })).rowCount
  return gone
}

/** Sweeps now and every hour. @returns the way to stop. */
export function keepHouse(database: Database, clock: Clock, log: Logger): () => void {
  const round = (): void => {
    sweep(database, clock.now()).then(
      (gone) => log.debug({ event: 'housekeeping.swept', gone }),
      (err: unknown) => log.warn({ event: 'housekeeping.failed', err }, 'swept next time'),
    )
  }
  round()
  const timer = setInterval(round, EVERY_MS).unref()
  return () => clearInterval(timer)
}
