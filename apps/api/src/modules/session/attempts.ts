import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'

/** Failures that are still remembered, in milliseconds. */
export const REMEMBERED_MS = 15 * 60_000

/** How many failures are borne before further attempts wait. */
export interface AttemptLimits {
  /** For one account, from one address. */
  readonly pair: number
  /** For one account, from everywhere: whoever guesses from many places. */
  readonly account: number
  /** From one address, on all accounts: a whole house may share one. */
  readonly address: number
}

export const SIGN_IN_LIMITS: AttemptLimits = { pair: 8, account: 25, address: 100 }
export const PIN_LIMITS: AttemptLimits = { pair: 5, account: 5, address: Number.MAX_SAFE_INTEGER }

interface Counts {
  readonly pair: number
  readonly account: number
  readonly address: number
  readonly oldest: Date | null
}

/** Counts failed attempts, and only those. A live session is never touched by it. */
export class Attempts {
  constructor(
    private readonly database: Database,
    private readonly clock: Clock,
    private readonly limits: AttemptLimits,
  ) {}

  /**
   * Counts an attempt as failed before it is judged, so that many at once cannot outrun the count.
   *
   * @returns the way to take it back when it succeeds; that forgives the earlier ones of the pair too.
   * @throws {Problem} `too-many-attempts`, with the seconds to wait; then nothing was counted.
   */
  async begin(account: string, address: string): Promise<() => Promise<void>> {
    const now = this.clock.now()
    await this.database.transaction(async (sql) => {
      await sql.query({ text: 'SELECT pg_advisory_xact_lock(hashtextextended($1, 8421))', values: [account] })
      const { rows } = await sql.query<Counts>({
        text: `SELECT count(*) FILTER (WHERE account = $1 AND address = $2)::int AS pair,
                      count(*) FILTER (WHERE account = $1)::int AS account,
                      count(*) FILTER (WHERE address = $2)::int AS address,
                      min(at) AS oldest
                 FROM sign_in_failure
                WHERE (account = $1 OR address = $2) AND at > $3`,
        values: [account, address, new Date(now.getTime() - REMEMBERED_MS)],
      })
      const counts = rows[0]
      if (counts && this.#isFull(counts)) throw tooMany(counts.oldest ?? now, now)
      await sql.query({
        text: 'INSERT INTO sign_in_failure (account, address, at) VALUES ($1, $2, $3)',
        values: [account, address, now],
      })
    })
    return async () => {
      await this.database.query({
        text: 'DELETE FROM sign_in_failure WHERE account = $1 AND address = $2',
        values: [account, address],
      })
    }
  }

  #isFull(counts: Counts): boolean {
    return (
      counts.pair >= this.limits.pair ||
      counts.account >= this.limits.account ||
      counts.address >= this.limits.address
    )
  }
}

function tooMany(oldest: Date, now: Date): Problem {
  const waitMs = oldest.getTime() + REMEMBERED_MS - now.getTime()
  return new Problem('too-many-attempts', { extra: { retryAfterS: Math.max(1, Math.ceil(waitMs / 1000)) } })
}
