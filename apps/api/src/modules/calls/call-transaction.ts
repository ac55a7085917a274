import { CallWork, RoomsMoved, type Change } from './call-work.js'
import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'
import { storeAnswer, storedAnswer, type KeyUse, type StoredAnswer } from '../../platform/http/idempotency.js'
import type { Actor } from '../../platform/http/session.js'
import type { Publisher } from '../../platform/realtime/publisher.js'

/** One request to change something: who makes it, and the key under which it is done once. */
export interface Tap {
  readonly actor: Actor
  readonly use: KeyUse
}

const TRIES = 4

/** Runs a command once for its key, in one transaction, and tells the screens after the commit. */
export class CallTransaction {
  constructor(
    readonly db: Database,
    readonly clock: Clock,
    private readonly publisher: Publisher,
  ) {}

  /**
   * @param work does the command and returns the id of the call that is the answer.
   * @throws {Problem} whatever the work refuses; then nothing is stored and nothing sent.
   */
  async run(tap: Tap, status: number, work: (work: CallWork) => Promise<string>): Promise<StoredAnswer> {
    const concerned: string[] = []
    for (let attempt = 1; ; attempt += 1) {
      try {
        return await this.#once(tap, status, concerned, work)
      } catch (error) {
        if (!(error instanceof RoomsMoved)) throw error
        if (attempt === TRIES)
          throw new Problem('unavailable', { detail: 'Too much happens at once.', cause: error })
        concerned.push(...error.rooms)
      }
    }
  }

  async #once(
    tap: Tap,
    status: number,
    concerned: readonly string[],
    work: (work: CallWork) => Promise<string>,
  ): Promise<StoredAnswer> {
    const done = await this.db.transaction(async (sql) => {
      const stored = await storedAnswer(sql, tap.use, this.clock.now())
      if (stored) return { answer: stored, changes: [], stock: [], notices: [] }

      const callWork = new CallWork(sql, tap.actor, this.clock.now(), this.clock.today(), concerned)
      const callId = await work(callWork)
      const changes = await callWork.finish()
      const change = changes.get(callId)
      if (!change) throw new Error('a command that changes nothing')
      const answer = { status, answer: change.body }
      await storeAnswer(sql, tap.use, answer, callWork.now)
      return {
        answer,
        changes: [...changes.values()],
        stock: callWork.stockChanged,
        notices: callWork.notices,
      }
    })
    // Only what was committed is told; a lost message shows up on the boards as a gap.
    for (const change of done.changes) this.tell(change)
    if (done.stock.length > 0) this.publisher.stockChanged(done.stock)
    for (const notice of done.notices) this.publisher.notice(notice)
    return done.answer
  }

  tell(change: Change): void {
    this.publisher.delta({
      roomId: change.roomId,
      revision: change.revision,
      event: change.event,
      call: JSON.parse(change.body) as unknown,
    })
  }

  stockChanged(catalogueItemIds: string[]): void {
    this.publisher.stockChanged(catalogueItemIds)
  }

  /** The stored answer to this tap, for a request that is going to be refused before any work. */
  replay(tap: Tap): Promise<StoredAnswer | null> {
    return this.db.transaction((sql) => storedAnswer(sql, tap.use, this.clock.now()))
  }
}
