import type { EventsPage, EventView } from '@bellpull/contracts'
import { readCursor, writeCursor } from './cursor.js'
import { iso } from '../calls/index.js'
import type { Database } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'

export interface EventsWish {
  readonly caseId?: string | undefined
  readonly callId?: string | undefined
  readonly after?: string | undefined
  readonly limit: number
}

type Row = EventView & { readonly seq: number }

/**
 * Events in order of commit. Each room numbers its own without a gap, under the room's lock, and times them so
 * that a later number never has an earlier time; so a cursor of one number a room skips nothing, however late
 * another room commits. Across rooms the order is that of the times.
 */
const SELECT = `
SELECT e.room_id || '.' || e.seq AS id, ${iso('e.at')} AS at, e.type, e.case_id AS "caseId", e.call_id AS "callId",
       e.item_id AS "itemId", e.room_id AS "roomId",
       json_build_object('id', p.id, 'initials', p.initials, 'name', p.name) AS actor, e.data, e.seq`

const AFTER = (room: string): string => `coalesce(($1::jsonb ->> ${room}::text)::int, 0)`

/** A short walk along each room's own numbers: the length of the log does not matter. */
const OF_HOUSE = `${SELECT}
  FROM room r
 CROSS JOIN LATERAL (SELECT * FROM event WHERE room_id = r.id AND seq > ${AFTER('r.id')} ORDER BY seq LIMIT $2) e
  JOIN person p ON p.id = e.actor_id
 ORDER BY e.at, e.room_id, e.seq
 LIMIT $2`

const OF_CASE = `${SELECT}
  FROM event e
  JOIN person p ON p.id = e.actor_id
 WHERE e.case_id = coalesce($3::uuid, (SELECT case_id FROM call WHERE id = $4))
   AND ($4::uuid IS NULL OR e.call_id = $4) AND e.seq > ${AFTER('e.room_id')}
 ORDER BY e.at, e.room_id, e.seq
 LIMIT $2`

/** Reads the log of what happened. */
export class EventsService {
  constructor(private readonly db: Database) {}

  /** @throws {Problem} `not-found` for an unknown case or call, `invalid-input` for a cursor that is none. */
  async page(wish: EventsWish): Promise<EventsPage> {
    const cursor = wish.after === undefined ? {} : readCursor(wish.after)
    if (cursor === null)
      throw new Problem('invalid-input', {
        errors: [{ pointer: '/after', message: 'is not a cursor of this list' }],
      })
    await this.#demandKnown(wish)
    const ofHouse = wish.caseId === undefined && wish.callId === undefined
    const { rows } = await this.db.query<Row>({
      name: ofHouse ? 'events-of-house' : 'events-of-case',
      text: ofHouse ? OF_HOUSE : OF_CASE,
      values: ofHouse
        ? [JSON.stringify(cursor), wish.limit]
        : [JSON.stringify(cursor), wish.limit, wish.caseId ?? null, wish.callId ?? null],
    })
    if (rows.length === 0) return { items: [], nextCursor: null }
    const told: Record<string, number> = { ...cursor }
    for (const row of rows) told[row.roomId] = Math.max(told[row.roomId] ?? 0, row.seq)
    return { items: rows.map(({ seq: _seq, ...event }) => event), nextCursor: writeCursor(told) }
  }

  async #demandKnown({ caseId, callId }: EventsWish): Promise<void> {
    const { rows } = await this.db.query<{ known: boolean }>({
      name: 'events-of-known',
      text: `SELECT ($1::uuid IS NULL OR EXISTS (SELECT 1 FROM surgical_case WHERE id = $1))
                AND ($2::uuid IS NULL OR EXISTS (SELECT 1 FROM call WHERE id = $2)) AS known`,
      values: [caseId ?? null, callId ?? null],
    })
    if (!rows[0]?.known) throw new Problem('not-found')
  }
}
