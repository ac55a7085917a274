import { kindsMustFit, person } from './call-view.sql.js'

/** Columns of one candidate package, as both halves of the pick select them. */
const CANDIDATE = 'f.id, f.lot, f.serial, f.use_by_on, f.location_id, f.walk_order, f.owner_rank'

/** Instants come as the text that clients read, and are stored as what they are. */
const NOW = '$5::text::timestamptz'
const NEEDED_AT = '$12::text::timestamptz'

/**
 * Up to `w.count` packages of one product that may be held, best first and numbered from 1, locked so that nobody
 * else holds them. What another transaction has locked is passed over, never waited for.
 *
 * The order is that of `compareCandidates` in the domain: a *now* call takes what is in the room first,
 * unless another package expires soon; else first to expire, nearest, owner. Two short walks along two
 * ordered partial indexes, never a sort over all the packages of a product.
 */
const PICK = `
  SELECT *, row_number() OVER () AS nth
    FROM (SELECT *
            FROM (SELECT *, false AS in_room
                    FROM (SELECT ${CANDIDATE} FROM unit f
                           WHERE f.catalogue_item_id = w.product AND f.state = 'available' AND f.sterile
                             AND f.place_room_id IS NULL AND f.use_by_on >= $6::date
                           ORDER BY f.use_by_on, f.walk_order, f.owner_rank, f.id
                           LIMIT w.count FOR UPDATE SKIP LOCKED) outside
                  UNION ALL
                  SELECT *, true
                    FROM (SELECT ${CANDIDATE} FROM unit f
                           WHERE f.catalogue_item_id = w.product AND f.state = 'available' AND f.sterile
                             AND f.place_room_id = still_open.room_id AND f.use_by_on >= $6::date
                           ORDER BY f.use_by_on, f.owner_rank, f.id
                           LIMIT w.count FOR UPDATE SKIP LOCKED) inside) f
           ORDER BY CASE WHEN NOT $7::boolean OR f.use_by_on <= $8::date THEN 0 WHEN f.in_room THEN 1 ELSE 2 END,
                    f.use_by_on, CASE WHEN f.in_room THEN 0 ELSE f.walk_order END, f.owner_rank, f.id
           LIMIT w.count) best`

/** $15 to $19 of {@link MAKE_CALL}. @param wanted in order of their lines, each of the catalogue. */
export function itemParameters(
  wanted: ReadonlyArray<{ id: string; catalogueItemId: string | null }>,
): [string[], number[], string[], number[], number[]] {
  const lines = new Map<string, number[]>()
  wanted.forEach(({ catalogueItemId }, index) => {
    const product = catalogueItemId ?? ''
    lines.set(product, [...(lines.get(product) ?? []), index + 1])
  })
  const order = [...lines.values()].flat()
  const counts = [...lines.values()].map((of) => of.length)
  const before = counts.map((_, index) => counts.slice(0, index).reduce((sum, count) => sum + count, 0))
  return [order.map((line) => wanted[line - 1]?.id ?? ''), order, [...lines.keys()], before, counts]
}

/**
 * A whole call in one statement, for the common case in which everything is in order: the case is open, the
 * caller may call, every product is known and stocked, and a package is free for each item. It then holds
 * the packages, writes call, items, event and answer, and advances the room's revision; all or nothing.
 * In any other case it writes nothing and returns no row, and the careful way (`make-call.ts`) finds out why.
 *
 * The key is locked as `storedAnswer` locks it. The room is locked first, as everywhere, so that revisions follow
 * the order of commit. `OFFSET 0` keeps a lookup of one row by its key just that: the statement is planned once for
 * a connection's life, perhaps while the tables were small, and a join could then be planned as a walk over all rows.
 *
 * $1 person, $2 key, $3 path, $4 request hash, $5 now, $6 house's day, $7 wanted now, $8 soon until,
 * $9 case, $10 call, $11 kind, $12 needed at, $13 called by, $14 side, $15 item ids, those of one product together,
 * $16 their lines, $17 products, and of each: $18 how many items stand before its first, $19 how many it has.
 */
export const MAKE_CALL = `
WITH asked AS MATERIALIZED (
  SELECT k.id AS case_id, k.room_id, k.case_number, k.side, r.number,
         ${person('cb')} AS called_by, ${person('eb')} AS entered_by
    FROM surgical_case k
   CROSS JOIN LATERAL (SELECT number FROM room WHERE id = k.room_id OFFSET 0) r
    JOIN person eb ON eb.id = $1::uuid
    JOIN person cb ON cb.id = $13::uuid AND cb.active AND (cb.role = 'surgeon' OR (cb.role = 'scrub' AND
         EXISTS (SELECT 1 FROM case_member m WHERE m.case_id = k.id AND m.person_id = cb.id)))
   WHERE k.id = $9::uuid AND k.status IN ('planned', 'inProgress') AND k.side = $14::text
     AND NOT EXISTS (SELECT 1 FROM idempotency_key x
                      WHERE x.person_id = $1::uuid AND x.key = $2::uuid AND x.method = 'POST' AND x.path = $3::text)
     AND pg_try_advisory_xact_lock(hashtextextended(concat_ws(' ', $1::uuid, $2::uuid, 'POST', $3::text), 8420))
), room_lock AS MATERIALIZED (
  SELECT r.id FROM room r WHERE r.id = (SELECT room_id FROM asked) FOR UPDATE
), still_open AS MATERIALIZED (
  -- The case may have been signed out while its room was waited for: the lock looks at its newest version.
  SELECT k.room_id FROM room_lock, surgical_case k
   WHERE k.id = $9::uuid AND k.status IN ('planned', 'inProgress') FOR SHARE OF k
), picked AS MATERIALIZED (
  SELECT w.product, ($15::uuid[])[w.before + f.nth] AS item_id, ($16::int[])[w.before + f.nth] AS line_no,
         f.id AS unit_id, f.lot, f.serial, f.use_by_on, l.id AS location_id, l.code, l.zone, l.walk_order,
         ci.category, ci.ref, ci.gtin, ci.label, ci.variant, ci.side, ci.kind, ci.part_name, ci.size,
         (SELECT s.name FROM implant_system s WHERE s.id = ci.system_id) AS system
    FROM still_open
   CROSS JOIN unnest($17::uuid[], $18::int[], $19::int[]) w(product, before, count)
   CROSS JOIN LATERAL (SELECT * FROM catalogue_item c
                        WHERE c.id = w.product AND c.active AND c.stocked AND c.side IN ('either', $14::text) OFFSET 0) ci
   CROSS JOIN LATERAL (${PICK}) f
   CROSS JOIN LATERAL (SELECT * FROM location WHERE id = f.location_id OFFSET 0) l
), rev AS (
  UPDATE room SET revision = revision + 1, event_seq = event_seq + 1,
                  last_event_at = greatest(last_event_at, ${NOW})
   WHERE id = (SELECT id FROM room_lock) AND (SELECT count(*) FROM picked) = cardinality($15::uuid[])
  RETURNING id AS room_id, revision, event_seq, last_event_at
), parts AS MATERIALIZED (
  -- The parts of the case that theirs must fit: those called before, and these.
  SELECT i.id, c.called_at, i.line_no, ci.kind
    FROM call c
   CROSS JOIN LATERAL (SELECT id, line_no, catalogue_item_id FROM item
                        WHERE call_id = c.id AND (outcome IS NULL OR outcome = 'implanted') OFFSET 0) i
   CROSS JOIN LATERAL (SELECT kind FROM catalogue_item WHERE id = i.catalogue_item_id OFFSET 0) ci
   WHERE c.case_id = $9::uuid
  UNION ALL
  SELECT item_id, ${NOW}, line_no, kind FROM picked
), answer AS MATERIALIZED (
  SELECT rev.room_id, rev.revision, json_build_object(
    'id', $10::uuid,
    'caseId', a.case_id,
    'room', json_build_object('id', a.room_id, 'number', a.number),
    'kind', $11::text,
    'neededAt', $12::text,
    'calledAt', $5::text,
    'calledBy', a.called_by,
    'enteredBy', a.entered_by,
    'readBack', NULL,
    'version', 1,
    'items', (SELECT json_agg(json_build_object(
        'id', p.item_id,
        'callId', $10::uuid,
        'catalogueItemId', p.product,
        'category', p.category,
        'ref', p.ref,
        'label', p.label,
        'variant', p.variant,
        'side', p.side,
        'stage', 'called',
        'outcome', NULL,
        'hold', 'held',
        'unit', json_build_object(
          'id', p.unit_id, 'gtin', p.gtin, 'lot', p.lot, 'serial', p.serial, 'useByOn', p.use_by_on,
          'location', json_build_object('id', p.location_id, 'code', p.code, 'zone', p.zone)),
        'alternatives', '[]'::json,
        'heldBy', '[]'::json,
        'pairs', CASE WHEN p.category = 'implant' THEN (
          SELECT coalesce(json_agg(json_build_object('itemId', o.id, 'result', 'notChecked')
                   ORDER BY o.called_at, o.line_no), '[]'::json)
            FROM parts o WHERE o.id <> p.item_id AND ${kindsMustFit('p.kind', 'o.kind')}) ELSE '[]'::json END,
        'acceptedBy', NULL,
        'offeredTo', NULL,
        'openedUnverified', false,
        'version', 1,
        'kind', p.kind,
        'partName', p.part_name,
        'size', p.size,
        'system', p.system,
        'acceptedAt', NULL,
        'pulledAt', NULL,
        'inRoomAt', NULL,
        'verifiedAt', NULL,
        'openedAt', NULL,
        'settledAt', NULL,
        'typed', false,
        'reason', NULL,
        'putBack', NULL,
        'walkOrder', p.walk_order,
        'replacesItemId', NULL
      ) ORDER BY p.line_no) FROM picked p),
    'caseNumber', a.case_number,
    'side', a.side,
    'confirmedAt', CASE WHEN $11::text = 'confirmed' THEN $5::text END,
    'revision', rev.revision,
    'open', true
  )::text AS body
  FROM rev, asked a
), new_call AS (
  INSERT INTO call (id, case_id, room_id, kind, needed_at, called_at, called_by, entered_by, confirmed_at, revision)
  SELECT $10::uuid, $9::uuid, rev.room_id, $11::text, ${NEEDED_AT}, ${NOW}, $13::uuid, $1::uuid,
         CASE WHEN $11::text = 'confirmed' THEN ${NOW} END, rev.revision
    FROM rev
), new_items AS (
  INSERT INTO item (id, call_id, line_no, catalogue_item_id, category, side, hold, unit_id)
  SELECT p.item_id, $10::uuid, p.line_no, p.product, p.category, p.side, 'held', p.unit_id
    FROM rev, picked p
), holds AS (
  UPDATE unit SET state = 'held', held_for = p.item_id FROM rev, picked p WHERE unit.id = p.unit_id
), new_event AS (
  INSERT INTO event (room_id, seq, type, at, case_id, call_id, actor_id, data)
  SELECT rev.room_id, rev.event_seq, 'call.called', rev.last_event_at, $9::uuid, $10::uuid, $1::uuid,
         json_build_object('kind', $11::text, 'neededAt', $12::text, 'calledBy', $13::uuid,
           'items', (SELECT json_agg(json_build_object('itemId', p.item_id, 'label', p.label, 'variant', p.variant,
                       'hold', 'held', 'unitId', p.unit_id) ORDER BY p.line_no) FROM picked p))::jsonb
    FROM rev
), new_key AS (
  -- A rival with the same key breaks the whole statement here: nothing is half done.
  INSERT INTO idempotency_key (person_id, key, method, path, request_hash, status, answer, created_at)
  SELECT $1::uuid, $2::uuid, 'POST', $3::text, $4::bytea, 201, answer.body, ${NOW} FROM answer
)
SELECT room_id AS "roomId", revision, body FROM answer`
