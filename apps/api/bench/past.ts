import { CALLS_A_CASE, idSql, PRODUCTS, ROOMS, SURGEONS } from './world.js'

/** Events that a finished call leaves behind in the product's log. */
const EVENTS_A_CALL = 4

const room = `${idSql('room', `c % ${ROOMS} + 1`)}`
const pastCase = idSql('pastCase', `c / ${CALLS_A_CASE} + 1`)
const product = (products: number) => idSql('product', `i % ${products} + 1`)
const called = (calls: number) => `now() - interval '1 hour' - interval '360 days' * (c::float8 / ${calls})`

/** Loads faster, and only what is known to be true: the checks of references are left out for this transaction. */
const TRUSTED = 'SET LOCAL session_replication_role = replica'

/**
 * Finished calls of the year past, two implanted items each, in a house of the product.
 *
 * @returns statements of one transaction, in order.
 */
export const fillPast = (calls: number, products = PRODUCTS): string[] => [
  TRUSTED,
  `INSERT INTO surgical_case (id, case_number, room_id, starts_at, started_at, closed_at, status, procedure_kind, procedure_label, side, surgeon_id)
   SELECT ${pastCase}, 'Q-' || c, ${room}, ${called(calls)}, ${called(calls)}, ${called(calls)} + interval '2 hours', 'closed',
          'shoulder', 'Shoulder, anatomic total', 'left', ${idSql('person', `c % ${SURGEONS} + 1`)}
     FROM generate_series(0, ${calls - 1}, ${CALLS_A_CASE}) c`,
  `INSERT INTO call (id, case_id, room_id, kind, needed_at, called_at, called_by, entered_by, confirmed_at, open, revision)
   SELECT ${idSql('pastCall', 'c + 1')}, ${pastCase}, ${room}, 'confirmed', ${called(calls)}, ${called(calls)},
          ${idSql('person', `c % ${SURGEONS} + 1`)}, ${idSql('person', `${SURGEONS} + 1`)}, ${called(calls)}, false, c / ${ROOMS} * ${EVENTS_A_CALL} + 1
     FROM generate_series(0, ${calls - 1}) c`,
  `INSERT INTO unit (id, catalogue_item_id, lot, serial, use_by_on, state, location_id, home_location_id, walk_order)
   SELECT ${idSql('pastUnit', 'i + 1')}, ${product(products)}, 'L' || i, 'P' || i, current_date + 300, 'implanted',
          ${idSql('location', 'i % 40 + 1')}, ${idSql('location', 'i % 40 + 1')}, i % 40 + 1
     FROM generate_series(0, ${calls * 2 - 1}) i`,
  `INSERT INTO item (id, call_id, line_no, catalogue_item_id, category, side, stage, outcome, hold, unit_id, accepted_by,
                     accepted_at, pulled_at, in_room_at, verified_at, opened_at, settled_at)
   SELECT ${idSql('pastItem', 'i + 1')}, ${idSql('pastCall', 'i / 2 + 1')}, i % 2 + 1, ${product(products)}, 'implant', 'either', 'opened',
          'implanted', 'held', ${idSql('pastUnit', 'i + 1')}, ${idSql('person', `${SURGEONS} + 1`)}, t, t, t, t, t, t
     FROM generate_series(0, ${calls * 2 - 1}) i
    CROSS JOIN LATERAL (SELECT i / 2 AS c) x CROSS JOIN LATERAL (SELECT ${called(calls)} AS t) y`,
  `INSERT INTO event (room_id, seq, type, at, case_id, call_id, actor_id)
   SELECT ${room}, c / ${ROOMS} * ${EVENTS_A_CALL} + e, CASE e WHEN 1 THEN 'call.called' ELSE 'item.opened' END, ${called(calls)},
          ${pastCase}, ${idSql('pastCall', 'c + 1')}, ${idSql('person', `${SURGEONS} + 1`)}
     FROM generate_series(0, ${calls - 1}) c, generate_series(1, ${EVENTS_A_CALL}) e`,
  `UPDATE room SET revision = n, event_seq = n
     FROM (SELECT room_id, max(seq) AS n FROM event GROUP BY room_id) e WHERE e.room_id = room.id`,
]

/** The same in the peer's house, which keeps one event a call. @returns statements of one transaction, in order. */
export const fillPeerPast = (calls: number): string[] => [
  TRUSTED,
  `INSERT INTO surgical_case SELECT ${pastCase}, ${room}, 'Q-' || c, 'left', 'closed'
     FROM generate_series(0, ${calls - 1}, ${CALLS_A_CASE}) c`,
  `INSERT INTO call SELECT ${idSql('pastCall', 'c + 1')}, ${pastCase}, ${room}, 'confirmed', ${called(calls)}, ${called(calls)},
          ${idSql('person', `c % ${SURGEONS} + 1`)}, ${idSql('person', `${SURGEONS} + 1`)}, c / ${ROOMS} + 1
     FROM generate_series(0, ${calls - 1}) c`,
  `INSERT INTO unit SELECT ${idSql('pastUnit', 'i + 1')}, ${product(PRODUCTS)}, 'L' || i, 'P' || i, current_date + 300,
          'B-' || i % 40 + 1, ${idSql('pastItem', 'i + 1')} FROM generate_series(0, ${calls * 2 - 1}) i`,
  `INSERT INTO item SELECT ${idSql('pastItem', 'i + 1')}, ${idSql('pastCall', 'i / 2 + 1')}, i % 2 + 1, ${product(PRODUCTS)},
          ${idSql('pastUnit', 'i + 1')} FROM generate_series(0, ${calls * 2 - 1}) i`,
  `INSERT INTO event SELECT ${room}, c / ${ROOMS} + 1, 'call.called', ${called(calls)}, ${idSql('pastCall', 'c + 1')},
          ${idSql('person', `${SURGEONS} + 1`)}, '{}' FROM generate_series(0, ${calls - 1}) c`,
  `UPDATE room SET revision = n FROM (SELECT room_id, max(revision) AS n FROM event GROUP BY room_id) e WHERE e.room_id = room.id`,
]
