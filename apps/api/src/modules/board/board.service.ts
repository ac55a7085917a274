import { callViewSql } from '../calls/index.js'
import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'

const OPEN_CALLS = callViewSql('c.open')

/**
 * One statement, so that rows and revisions are of one moment; the text that PostgreSQL makes is sent as it is.
 * $1 is the house's day.
 */
const BOARD = `
WITH calls AS MATERIALIZED (${OPEN_CALLS})
SELECT '{"revisions":' || (SELECT coalesce(json_object_agg(id, revision), '{}'::json)::text FROM room)
    || ',"calls":[' || coalesce((SELECT string_agg(body, ',' ORDER BY "roomId", revision, id) FROM calls), '') || ']}' AS body`

const CASE_CALLS = `
WITH calls AS MATERIALIZED (${callViewSql('c.case_id = $2')})
SELECT '[' || coalesce((SELECT string_agg(body, ',' ORDER BY body::json->>'calledAt', id) FROM calls), '') || ']' AS body
  FROM surgical_case k WHERE k.id = $2`

/** What the screens start from. */
export class BoardService {
  constructor(
    private readonly db: Database,
    private readonly clock: Clock,
  ) {}

  /** Every open call with the revisions of all rooms, as JSON text. */
  async snapshot(): Promise<string> {
    const { rows } = await this.db.query<{ body: string }>({
      name: 'board',
      text: BOARD,
      values: [this.clock.today()],
    })
    return rows[0]!.body
  }

  /** Every call of a case, finished ones too, as JSON text; `null` for an unknown case. */
  async findCallsOfCase(caseId: string): Promise<string | null> {
    const { rows } = await this.db.query<{ body: string }>({
      name: 'calls-of-case',
      text: CASE_CALLS,
      values: [this.clock.today(), caseId],
    })
    return rows[0]?.body ?? null
  }
}
