import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { Attempts, PIN_LIMITS } from './attempts.js'
import { matchesPin } from './password.js'

/** Where wrong PINs come from does not matter: whoever stands at the table uses the table's device. */
const ANYWHERE = 'pin'

/** The PIN by which the second person says that they have checked. */
export class PinService {
  readonly #attempts: Attempts

  constructor(
    private readonly database: Database,
    clock: Clock,
  ) {
    this.#attempts = new Attempts(database, clock, PIN_LIMITS)
  }

  /**
   * Whether this is the person's PIN. A wrong one is counted at once and stays counted, so ask before a
   * transaction is begun, not inside it: it would neither survive a rollback nor find a free connection.
   *
   * @throws {Problem} `too-many-attempts` after five wrong ones in a quarter of an hour.
   */
  async check(personId: string, pin: string): Promise<boolean> {
    const succeeded = await this.#attempts.begin(`pin:${personId}`, ANYWHERE)
    const { rows } = await this.database.query<{ pin_hash: string | null }>({
      text: 'SELECT pin_hash FROM person WHERE id = $1 AND active',
      values: [personId],
    })
    const hash = rows[0]?.pin_hash
    if (!hash || !(await matchesPin(pin, hash))) return false
    await succeeded()
    return true
  }
}
