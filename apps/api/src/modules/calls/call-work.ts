import { CALL_VIEW_BY_IDS } from './call-view.sql.js'
import {
  ITEM_COLUMNS,
  getCalls,
  getItems,
  type CallRow,
  type ItemRow,
  type LastStep,
  type UnitRow,
} from './rows.js'
import type { EventType } from '@bellpull/contracts'
import { GONE_STATES, type UndoableCommand, type UnitState } from '@bellpull/domain'
import type { Sql } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'
import type { Actor } from '../../platform/http/session.js'

/** The rooms that had to be locked changed between looking and locking: the work begins again. */
export class RoomsMoved extends Error {
  override readonly name = 'RoomsMoved'
  /** @param rooms what has to be locked as well the next time. */
  constructor(readonly rooms: readonly string[] = []) {
    super('the rooms to lock changed')
  }
}

export interface Change {
  readonly roomId: string
  readonly revision: number
  readonly event: string
  readonly body: string
}

const GONE: readonly UnitState[] = GONE_STATES

/** Recalled or quarantined: nobody may hold, pull, verify or open it. */
export const isStopped = (unit: UnitRow): boolean => unit.state === 'recalled' || unit.state === 'quarantined'

interface PendingEvent {
  readonly type: EventType
  readonly itemId: string | null
  readonly data: Record<string, unknown>
}

type ItemPatch = Partial<Omit<ItemRow, 'id' | 'callId' | 'product' | 'version' | 'category' | 'side'>>

/**
 * One command's work inside one transaction: what it locks, changes and says. {@link finish} then advances
 * the revision of each room once for each call that changed, and writes the events.
 *
 * Lock order is always rooms by id, then packages. Every change of a call happens under its room's lock.
 */
export class CallWork {
  readonly #calls = new Map<string, CallRow>()
  readonly #events = new Map<string, PendingEvent[]>()
  readonly #callPatches = new Map<string, Record<string, unknown>>()
  readonly #lockedRooms = new Set<string>()
  readonly #created = new Set<string>()
  readonly #stock = new Set<string>()
  readonly #notices: ({ kind: string } & Record<string, unknown>)[] = []

  constructor(
    readonly sql: Sql,
    readonly actor: Actor,
    readonly now: Date,
    /** The house's day, `YYYY-MM-DD`. */
    readonly today: string,
    /** Rooms of others that an earlier attempt found to be concerned. */
    private readonly concerned: readonly string[] = [],
  ) {}

  get stockChanged(): string[] {
    return [...this.#stock]
  }

  get notices(): ReadonlyArray<{ kind: string } & Record<string, unknown>> {
    return this.#notices
  }

  /** Rooms in order of their ids, once for a transaction: a second, larger wish could deadlock. */
  async lockRooms(roomIds: readonly string[]): Promise<void> {
    if (this.#lockedRooms.size > 0) throw new Error('rooms are locked once')
    const ids = [...new Set([...roomIds, ...this.concerned])]
    await this.sql.query({
      name: 'lock-rooms',
      text: 'SELECT id FROM room WHERE id = ANY($1::uuid[]) ORDER BY id FOR UPDATE',
      values: [ids],
    })
    for (const id of ids) this.#lockedRooms.add(id)
  }

  holdsRoom(roomId: string): boolean {
    return this.#lockedRooms.has(roomId)
  }

  /** A call and its items, as they stand under the room's lock. @throws {RoomsMoved} when that is not held. */
  async load(callId: string): Promise<{ call: CallRow; items: ItemRow[] }> {
    const [call] = await getCalls(this.sql, [callId])
    if (!call) throw new Problem('not-found')
    if (!this.holdsRoom(call.roomId)) throw new RoomsMoved([call.roomId])
    this.#calls.set(call.id, call)
    return { call, items: await getItems(this.sql, { callId }) }
  }

  /** A call that this command makes: its first version is 1, whatever else happens to it here. */
  created(call: CallRow): void {
    this.#created.add(call.id)
  }

  async updateItem(item: ItemRow, patch: ItemPatch): Promise<void> {
    const sets: string[] = []
    const values: unknown[] = [item.id]
    for (const [field, value] of Object.entries(patch)) {
      const column = ITEM_COLUMNS[field]
      if (!column) throw new Error(`item has no ${field}`)
      values.push(field === 'lastStep' && value !== null ? JSON.stringify(value) : value)
      sets.push(`${column} = $${values.length}`)
    }
    await this.sql.query({
      text: `UPDATE item SET ${[...sets, 'version = version + 1'].join(', ')} WHERE id = $1`,
      values,
    })
  }

  updateCall(call: CallRow, patch: Record<string, unknown>): void {
    this.#callPatches.set(call.id, { ...this.#callPatches.get(call.id), ...patch })
  }

  /**
   * Moves a package or changes what it is, and keeps where it went when its place changed. A package that has
   * been recalled or quarantined stays that, whatever is done with it, until it is opened or let free by those
   * who may: a hold that ends must not make it usable again.
   */
  async updateUnit(
    unit: UnitRow,
    to: { state: UnitState; heldFor: string | null; locationId?: string },
    why: string,
    itemId: string | null,
  ): Promise<void> {
    const locationId = to.locationId ?? unit.locationId
    const state = isStopped(unit) && !GONE.includes(to.state) ? unit.state : to.state
    await this.sql.query({
      name: 'update-unit',
      text: 'UPDATE unit SET state = $2, held_for = $3, location_id = $4 WHERE id = $1',
      values: [unit.id, state, to.heldFor, locationId],
    })
    if (locationId !== unit.locationId) {
      await this.sql.query({
        name: 'insert-movement',
        text: `INSERT INTO movement (unit_id, item_id, at, actor_id, why, from_location_id, to_location_id, to_state)
               VALUES ($1, $2, $3, $4, $5, $6, $7, $8)`,
        values: [unit.id, itemId, this.now, this.actor.id, why, unit.locationId, locationId, state],
      })
    }
    this.#stock.add(unit.catalogueItemId)
  }

  /** Says what happened; the call it happened to counts as changed. */
  event(call: CallRow, itemId: string | null, type: EventType, data: Record<string, unknown> = {}): void {
    this.#calls.set(call.id, call)
    const pending = this.#events.get(call.id) ?? []
    pending.push({ type, itemId, data })
    this.#events.set(call.id, pending)
  }

  notice(message: { kind: string } & Record<string, unknown>): void {
    this.#notices.push(message)
  }

  markStock(catalogueItemId: string): void {
    this.#stock.add(catalogueItemId)
  }

  /** What {@link LastStep} keeps of an item and its package before a step. */
  stepBefore(command: UndoableCommand, item: ItemRow, unit: UnitRow | null): LastStep {
    const before: Record<string, unknown> = {}
    for (const field of Object.keys(ITEM_COLUMNS)) {
      if (field !== 'lastStep') before[field] = item[field as keyof ItemRow]
    }
    return {
      command,
      by: this.actor.id,
      at: this.now.toISOString(),
      item: before,
      unit: unit && { id: unit.id, state: unit.state, locationId: unit.locationId },
    }
  }

  /**
   * Advances rooms and calls, writes the events, and returns each changed call as clients receive it, in
   * the order of room and call.
   */
  async finish(): Promise<Map<string, Change>> {
    const changed = [...this.#events.entries()]
      .map(([callId, events]) => ({ call: this.#calls.get(callId)!, events }))
      .sort((a, b) => a.call.roomId.localeCompare(b.call.roomId) || a.call.id.localeCompare(b.call.id))
    for (const { call, events } of changed) {
      const { rows } = await this.sql.query<{ revision: number; seq: number; at: Date }>({
        name: 'advance-room',
        text: `UPDATE room SET revision = revision + 1, event_seq = event_seq + $2,
                               last_event_at = greatest(last_event_at, $3)
                WHERE id = $1 RETURNING revision, event_seq AS seq, last_event_at AS at`,
        values: [call.roomId, events.length, this.now],
      })
      const room = rows[0]!
      await this.#saveCall(call, room.revision)
      await this.#saveEvents(call, events, room)
    }
    return this.#views(changed.map(({ call, events }) => ({ call, event: events[0]!.type })))
  }

  async #saveCall(call: CallRow, revision: number): Promise<void> {
    const patch = this.#callPatches.get(call.id) ?? {}
    const values: unknown[] = [call.id, revision, this.#created.has(call.id) ? 0 : 1]
    const sets = Object.entries(patch).map(([column, value]) => `${column} = $${values.push(value)}`)
    await this.sql.query({
      text: `UPDATE call SET ${[...sets, 'revision = $2', 'version = version + $3'].join(', ')},
                    open = EXISTS (SELECT 1 FROM item i WHERE i.call_id = call.id AND (i.outcome IS NULL OR
                      (i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL)))
              WHERE id = $1`,
      values,
    })
  }

  async #saveEvents(call: CallRow, events: PendingEvent[], room: { seq: number; at: Date }): Promise<void> {
    const first = room.seq - events.length + 1
    await this.sql.query({
      name: 'insert-events',
      text: `INSERT INTO event (room_id, seq, type, at, case_id, call_id, item_id, actor_id, data)
             SELECT $1, $2 + e.n - 1, e.type, $3, $4, $5, e.item_id, $6, e.data
               FROM unnest($7::text[], $8::uuid[], $9::jsonb[]) WITH ORDINALITY e(type, item_id, data, n)`,
      values: [
        call.roomId,
        first,
        room.at,
        call.caseId,
        call.id,
        this.actor.id,
        events.map((event) => event.type),
        events.map((event) => event.itemId),
        events.map((event) => JSON.stringify(event.data)),
      ],
    })
  }

  async #views(changed: { call: CallRow; event: string }[]): Promise<Map<string, Change>> {
    const { rows } = await this.sql.query<{ id: string; roomId: string; revision: number; body: string }>({
      name: 'call-view',
      text: CALL_VIEW_BY_IDS,
      values: [this.today, changed.map(({ call }) => call.id)],
    })
    const byId = new Map(rows.map((row) => [row.id, row]))
    return new Map(
      changed.map(({ call, event }) => {
        const row = byId.get(call.id)!
        return [call.id, { roomId: row.roomId, revision: row.revision, event, body: row.body }]
      }),
    )
  }
}
