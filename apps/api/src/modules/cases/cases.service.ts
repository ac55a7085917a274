import type { CaseCommand } from '@bellpull/contracts'
import { boundsOfDay, type Clock } from '../../platform/clock.js'
import type { Database, Sql } from '../../platform/db/sql.js'
import { storeAnswer, storedAnswer, type KeyUse, type StoredAnswer } from '../../platform/http/idempotency.js'
import { Problem } from '../../platform/http/problem.js'
import type { Actor } from '../../platform/http/session.js'
import type { Publisher } from '../../platform/realtime/publisher.js'
import { nextCase, type CaseState, type CaseStep, type Unsettled } from './case-steps.js'
import { CASE_BY_ID, CASES_OF_DAYS } from './case-view.sql.js'

export interface CasesServiceDeps {
  readonly database: Database
  readonly clock: Clock
  readonly publisher: Publisher
  readonly houseZone: string
}

interface CaseRow extends CaseState {
  readonly roomId: string
  readonly version: number
}

/** A request to change a case. What can only be refused after a look at the key is read by `read`. */
export interface CaseTap {
  readonly actor: Actor
  readonly use: KeyUse
  /** @throws {Problem} `invalid-input`, `not-found` */
  readonly read: () => { caseId: string; command: CaseCommand }
}

export class CasesService {
  constructor(private readonly deps: CasesServiceDeps) {}

  /** The cases of a day of the house, in order of start, as JSON text. @param on `YYYY-MM-DD`, else today. */
  async list(on: string | undefined, roomId: string | undefined): Promise<string> {
    const { database, clock, houseZone } = this.deps
    const { from, to } = boundsOfDay(houseZone, on ?? clock.today())
    const { rows } = await database.query<{ body: string }>({
      name: 'cases-of-days',
      text: CASES_OF_DAYS,
      values: [houseZone, from, to, roomId ?? null],
    })
    return `[${rows.map((row) => row.body).join(',')}]`
  }

  /** One case as JSON text. @throws {Problem} `not-found` */
  get(caseId: string): Promise<string> {
    return this.#view(this.deps.database, caseId)
  }

  /** Does a command once for its key, in one transaction, and tells the screens after the commit. */
  async apply(tap: CaseTap): Promise<StoredAnswer> {
    const { database, clock, publisher } = this.deps
    const now = clock.now()
    const done = await database.transaction(async (sql) => {
      const stored = await storedAnswer(sql, tap.use, now)
      if (stored) return { answer: stored, changed: null }

      const { caseId, command } = tap.read()
      const from = await this.#lock(sql, caseId)
      if (command.expectedVersion !== undefined && command.expectedVersion !== from.version)
        throw new Problem('case-moved-on', { extra: { version: from.version } })
      const unsettled = await unsettledOf(sql, caseId)
      const step = nextCase(from, { command, role: tap.actor.role, now, unsettled })
      await save(sql, caseId, step.state)
      await record(sql, { caseId, roomId: from.roomId, step, actor: tap.actor, command, now })
      const answer = { status: 200, answer: await this.#view(sql, caseId) }
      await storeAnswer(sql, tap.use, answer, now)
      return { answer, changed: caseId }
    })
    if (done.changed !== null) publisher.notice({ kind: 'case.changed', caseId: done.changed })
    return done.answer
  }

  async #view(sql: Sql, caseId: string): Promise<string> {
    const { rows } = await sql.query<{ body: string }>({
      name: 'case-by-id',
      text: CASE_BY_ID,
      values: [this.deps.houseZone, caseId],
    })
    const found = rows[0]
    if (!found) throw new Problem('not-found')
    return found.body
  }

  /**
   * The room, then its case: the order in which calls lock them. Under the room's lock nothing of the case's
   * calls changes, so that what is settled now is settled when the case closes.
   */
  async #lock(sql: Sql, caseId: string): Promise<CaseRow> {
    await sql.query({
      text: 'SELECT id FROM room WHERE id = (SELECT room_id FROM surgical_case WHERE id = $1) FOR UPDATE',
      values: [caseId],
    })
    const { rows } = await sql.query<CaseRow>({
      text: `SELECT room_id AS "roomId", version, status, started_at AS "startedAt", time_out_at AS "timeOutAt",
                    time_out_ended_at AS "timeOutEndedAt", patient_out_at AS "patientOutAt", closed_at AS "closedAt",
                    status_reason AS "statusReason"
               FROM surgical_case WHERE id = $1 FOR NO KEY UPDATE`,
      values: [caseId],
    })
    const found = rows[0]
    if (!found) throw new Problem('not-found')
    return found
  }
}

async function unsettledOf(sql: Sql, caseId: string): Promise<Unsettled[]> {
  const { rows } = await sql.query<Unsettled>({
    text: `SELECT i.id AS "itemId", i.call_id AS "callId", coalesce(ci.label, i.text) AS label, ci.variant, i.stage
             FROM call k
             JOIN item i ON i.call_id = k.id
             LEFT JOIN catalogue_item ci ON ci.id = i.catalogue_item_id
            WHERE k.case_id = $1 AND i.outcome IS NULL
            ORDER BY k.called_at, k.id, i.line_no`,
    values: [caseId],
  })
  return rows
}

async function save(sql: Sql, caseId: string, state: CaseState): Promise<void> {
  await sql.query({
    text: `UPDATE surgical_case
              SET status = $2, started_at = $3, time_out_at = $4, time_out_ended_at = $5, patient_out_at = $6,
                  closed_at = $7, status_reason = $8, version = version + 1
            WHERE id = $1`,
    values: [
      caseId,
      state.status,
      state.startedAt,
      state.timeOutAt,
      state.timeOutEndedAt,
      state.patientOutAt,
      state.closedAt,
      state.statusReason,
    ],
  })
}

interface Recorded {
  readonly caseId: string
  readonly roomId: string
  readonly step: CaseStep
  readonly actor: Actor
  readonly command: CaseCommand
  readonly now: Date
}

/** Writes the event under the room's own count. The board's revision stays: no call has changed. */
async function record(sql: Sql, { caseId, roomId, step, actor, command, now }: Recorded): Promise<void> {
  await sql.query({
    text: `WITH counted AS (
             UPDATE room SET event_seq = event_seq + 1, last_event_at = greatest(last_event_at, $2)
              WHERE id = $1 RETURNING event_seq, last_event_at)
           INSERT INTO event (room_id, seq, type, at, case_id, actor_id, data)
           SELECT $1, event_seq, $3, last_event_at, $4, $5, $6 FROM counted`,
    values: [
      roomId,
      now,
      step.event,
      caseId,
      actor.id,
      JSON.stringify(command.reason === undefined ? {} : { reason: command.reason }),
    ],
  })
}
