import { EXPIRES_SOON_DAYS, type CallKind, type CaseSide } from '@bellpull/domain'
import { RoomsMoved, isStopped, type CallWork } from './call-work.js'
import { lockUnit, type CallRow, type UnitRow } from './rows.js'
import type { Sql } from '../../platform/db/sql.js'

/** What an item wants held. */
export interface Wish {
  readonly itemId: string
  readonly catalogueItemId: string
  readonly roomId: string
  readonly caseSide: CaseSide
  readonly kind: CallKind
  /** Wanted at once: what lies in the room goes first. */
  readonly now: boolean
}

/** The day until which a use-by date counts as soon, `YYYY-MM-DD`. */
export function soonUntil(today: string): string {
  const day = new Date(`${today}T00:00:00Z`)
  day.setUTCDate(day.getUTCDate() + EXPIRES_SOON_DAYS)
  return day.toISOString().slice(0, 10)
}

/**
 * Holds the best free package for an item, or returns `null`. Waits for a package that another transaction
 * has in hand rather than pass it over, so that *none free* is never said of one that was only being looked at.
 * The order is that of `compareCandidates` in the domain.
 */
export async function holdFree(work: CallWork, wish: Wish): Promise<UnitRow | null> {
  // A second look sees what came free while the first one waited.
  const unitId = (await pickFree(work, wish)) ?? (await pickFree(work, wish))
  if (unitId === null) return null
  const unit = await lockUnit(work.sql, unitId)
  await work.updateUnit(unit, { state: 'held', heldFor: wish.itemId }, 'held', wish.itemId)
  return unit
}

async function pickFree(work: CallWork, wish: Wish): Promise<string | null> {
  const { rows } = await work.sql.query<{ id: string }>({
    name: 'pick-free',
    text: `SELECT u.id FROM unit u JOIN catalogue_item ci ON ci.id = u.catalogue_item_id
            WHERE u.catalogue_item_id = $1 AND u.state = 'available' AND u.sterile AND u.use_by_on >= $2::date
              AND (u.place_room_id IS NULL OR u.place_room_id = $3) AND ci.side IN ('either', $4)
            ORDER BY CASE WHEN NOT $5 OR u.use_by_on <= $6::date THEN 0
                          WHEN u.place_room_id IS NOT NULL THEN 1 ELSE 2 END,
                     u.use_by_on, CASE WHEN u.place_room_id IS NOT NULL THEN 0 ELSE u.walk_order END,
                     u.owner_rank, u.id
            LIMIT 1 FOR UPDATE OF u`,
    values: [wish.catalogueItemId, work.today, wish.roomId, wish.caseSide, wish.now, soonUntil(work.today)],
  })
  return rows[0]?.id ?? null
}

interface EarlyHold {
  readonly unitId: string
  readonly itemId: string
  readonly callId: string
  readonly roomId: string
}

/**
 * Early calls whose package of these products is still on the shelf, within reach of this room; a confirmed call
 * goes before them.
 */
async function findEarlyHolds(
  sql: Sql,
  catalogueItemIds: readonly string[],
  roomId: string,
  today: string,
): Promise<EarlyHold[]> {
  const { rows } = await sql.query<EarlyHold>({
    name: 'find-early-holds',
    text: `SELECT u.id AS "unitId", i.id AS "itemId", c.id AS "callId", c.room_id AS "roomId"
             FROM unit u JOIN item i ON i.id = u.held_for JOIN call c ON c.id = i.call_id
            WHERE u.catalogue_item_id = ANY($1::uuid[]) AND u.state = 'held'
              AND (u.place_room_id IS NULL OR u.place_room_id = $3)
              AND u.use_by_on >= $2::date AND u.sterile
              AND i.outcome IS NULL AND i.stage IN ('called', 'accepted') AND c.kind = 'early'
            ORDER BY c.needed_at DESC, u.use_by_on, u.id`,
    values: [catalogueItemIds, today, roomId],
  })
  return rows
}

/** The rooms that a confirmed call for these products might take an early hold from. */
export async function roomsWithEarlyHolds(
  sql: Sql,
  catalogueItemIds: readonly string[],
  roomId: string,
  today: string,
): Promise<string[]> {
  return (await findEarlyHolds(sql, catalogueItemIds, roomId, today)).map((hold) => hold.roomId)
}

/**
 * Takes the package of the early call that needs it last, for a confirmed one, and lets the early item try
 * again. Both are told.
 *
 * @throws {RoomsMoved} when the other room is not locked yet: the work begins again with its lock.
 */
export async function takeEarlyHold(work: CallWork, wish: Wish, call: CallRow): Promise<UnitRow | null> {
  const all = await findEarlyHolds(work.sql, [wish.catalogueItemId], call.roomId, work.today)
  const holds = all.filter((hold) => hold.callId !== call.id)
  const taken = holds[0]
  if (!taken) return null
  if (!work.holdsRoom(taken.roomId)) throw new RoomsMoved(holds.map((hold) => hold.roomId))

  const early = await work.load(taken.callId)
  const item = early.items.find(({ id }) => id === taken.itemId)
  const unit = await lockUnit(work.sql, taken.unitId)
  if (!item || unit.heldFor !== taken.itemId) return null

  // The early item lets go first: a package is kept for one item at a time.
  const lost = {
    hold: 'noneFree',
    unitId: null,
    stage: 'called',
    acceptedBy: null,
    acceptedAt: null,
    lastStep: null,
  } as const
  await work.updateItem(item, lost)
  await work.updateUnit(unit, { state: 'held', heldFor: wish.itemId }, 'confirmed over early', wish.itemId)
  work.event(early.call, item.id, 'item.holdLost', {
    unitId: unit.id,
    toRoomId: call.roomId,
    toCallId: call.id,
  })

  const again = await holdFree(work, {
    ...wish,
    itemId: item.id,
    roomId: early.call.roomId,
    caseSide: early.call.caseSide,
    kind: 'early',
    now: false,
  })
  if (again) {
    await work.updateItem(item, {
      hold: 'held',
      unitId: again.id,
      stage: item.stage,
      acceptedBy: item.acceptedBy,
      acceptedAt: item.acceptedAt,
    })
    work.event(early.call, item.id, 'item.heldAgain', { unitId: again.id })
  }
  work.notice({
    kind: 'hold.taken',
    roomId: early.call.roomId,
    toRoomId: call.roomId,
    callId: early.call.id,
    itemId: item.id,
    heldAgain: again !== null,
  })
  return unit
}

/** Holds what is free, or for a confirmed call what an early one has on the shelf; `null` when neither is there. */
export async function holdFor(work: CallWork, wish: Wish, call: CallRow): Promise<UnitRow | null> {
  const free = await holdFree(work, wish)
  if (free || wish.kind !== 'confirmed') return free
  return takeEarlyHold(work, wish, call)
}

/** Gives a package on the shelf back to everybody, and says so to the rooms that have none free. */
export async function letGo(work: CallWork, unit: UnitRow, why: string, itemId: string): Promise<void> {
  await work.updateUnit(unit, { state: 'available', heldFor: null }, why, itemId)
  if (!isStopped(unit)) await tellWaitingRooms(work, unit.catalogueItemId)
}

/** Rooms whose item has none free are told that stock came back; nothing is held by itself. */
export async function tellWaitingRooms(work: CallWork, catalogueItemId: string): Promise<void> {
  const { rows } = await work.sql.query<{ itemId: string; callId: string; roomId: string }>({
    name: 'find-waiting-items',
    text: `SELECT i.id AS "itemId", c.id AS "callId", c.room_id AS "roomId"
             FROM call c JOIN item i ON i.call_id = c.id
            WHERE c.open AND i.catalogue_item_id = $1 AND i.hold = 'noneFree' AND i.outcome IS NULL`,
    values: [catalogueItemId],
  })
  for (const waiting of rows) work.notice({ kind: 'stock.returned', catalogueItemId, ...waiting })
}
