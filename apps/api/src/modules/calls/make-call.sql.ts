import { iso, kindsMustFit, person } from './call-view.sql.js'

/** Columns of one candidate package, as both halves of the pick select them. */
const CANDIDATE = 'f.id, f.lot, f.serial, f.use_by_on, f.location_id, f.walk_order, f.owner_rank'

/**
 * Up to `count` packages of one product that may be held, best first, locked so that nobody else holds them.
 * What another transaction has locked is passed over, never waited for.
 *
 * The order is that of `compareCandidates` in the domain: a *now* call takes what is in the room first,
 * unless another package expires soon; else first to expire, nearest, owner. Two short walks along two
 * ordered partial indexes, never a sort over all the packages of a product.
 */
const pick = (product: string, count: string): string => `
  SELECT f.*, f.place = 'room' AS in_room
    FROM (SELECT *, 'core' AS place
            FROM (SELECT ${CANDIDATE} FROM unit f
                   WHERE f.catalogue_item_id = ${product} AND f.state = 'available' AND f.sterile
                     AND f.place_room_id IS NULL AND f.use_by_on >= $6::date
                   ORDER BY f.use_by_on, f.walk_order, f.owner_rank, f.id
                   LIMIT ${count} FOR UPDATE SKIP LOCKED) outside
          UNION ALL
          SELECT *, 'room' AS place
            FROM (SELECT ${CANDIDATE} FROM unit f
                   WHERE f.catalogue_item_id = ${product} AND f.state = 'available' AND f.sterile
                     AND f.place_room_id = room_lock.id AND f.use_by_on >= $6::date
                   ORDER BY f.use_by_on, f.owner_rank, f.id
                   LIMIT ${count} FOR UPDATE SKIP LOCKED) inside) f
   ORDER BY CASE WHEN NOT $7::boolean OR f.use_by_on <= $8::date THEN 0 WHEN f.place = 'room' THEN 1 ELSE 2 END,
            f.use_by_on, CASE WHEN f.place = 'room' THEN 0 ELSE f.walk_order END, f.owner_rank, f.id
   LIMIT ${count}`

/**
 * A whole call in one statement, for the common case in which everything is in order: the case is open, the
 * caller may call, every product is known and stocked, and a package is free for each item. It then holds
 * the packages, writes call, items, event and answer, and advances the room's revision; all or nothing.
 * In any other case it writes nothing and returns no row, and the careful way (`make-call.ts`) finds out why.
 *
 * The key is locked as `storedAnswer` locks it. The room is locked first, as everywhere, so that revisions follow the order of commit.
 *
 * $1 person, $2 key, $3 path, $4 request hash, $5 now, $6 house's day, $7 wanted now, $8 soon until,
 * $9 case, $10 call, $11 kind, $12 needed at, $13 called by, $14 side, $15 item ids, $16 their products.
 */
export const MAKE_CALL = `
WITH asked AS MATERIALIZED (
  SELECT k.id AS case_id, k.room_id, k.case_number, k.side, r.number,
         ${person('cb')} AS called_by, ${person('eb')} AS entered_by
    FROM surgical_case k
    JOIN room r ON r.id = k.room_id
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
  SELECT k.id FROM room_lock, surgical_case k
   WHERE k.id = $9::uuid AND k.status IN ('planned', 'inProgress') FOR SHARE OF k
), wanted AS MATERIALIZED (
  SELECT w.product, array_agg(w.item_id ORDER BY w.n) AS item_ids, count(*)::int AS count,
         min(w.n) AS first_line
    FROM unnest($15::uuid[], $16::uuid[]) WITH ORDINALITY w(item_id, product, n)
   GROUP BY w.product
), picked AS MATERIALIZED (
  SELECT ci.id AS product, w.item_ids[row_number() OVER (PARTITION BY ci.id ORDER BY
           CASE WHEN NOT $7::boolean OR f.use_by_on <= $8::date THEN 0 WHEN f.in_room THEN 1 ELSE 2 END,
           f.use_by_on, CASE WHEN f.in_room THEN 0 ELSE f.walk_order END, f.owner_rank, f.id)] AS item_id,
         f.id AS unit_id, f.lot, f.serial, f.use_by_on, l.id AS location_id, l.code, l.zone, l.walk_order,
         ci.category, ci.ref, ci.gtin, ci.label, ci.variant, ci.side, ci.kind, ci.part_name, ci.size, s.name AS system
    FROM room_lock
   CROSS JOIN still_open
   CROSS JOIN wanted w
    JOIN catalogue_item ci ON ci.id = w.product AND ci.active AND ci.stocked AND ci.side IN ('either', $14::text)
    LEFT JOIN implant_system s ON s.id = ci.system_id
   CROSS JOIN LATERAL (${pick('w.product', 'w.count')}) f
    JOIN location l ON l.id = f.location_id
), rev AS (
  UPDATE room SET revision = revision + 1, event_seq = event_seq + 1,
                  last_event_at = greatest(last_event_at, $5::timestamptz)
   WHERE id = (SELECT id FROM room_lock) AND (SELECT count(*) FROM picked) = cardinality($15::uuid[])
  RETURNING id AS room_id, revision, event_seq, last_event_at
), answer AS MATERIALIZED (
  SELECT rev.revision, json_build_object(
    'id', $10::uuid,
    'caseId', a.case_id,
    'room', json_build_object('id', a.room_id, 'number', a.number),
    'kind', $11::text,
    'neededAt', ${iso('$12::timestamptz')},
    'calledAt', ${iso('$5::timestamptz')},
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
            FROM (SELECT i.id, oc.called_at, i.line_no, oci.kind
                    FROM call oc JOIN item i ON i.call_id = oc.id
                    JOIN catalogue_item oci ON oci.id = i.catalogue_item_id
                   WHERE oc.case_id = a.case_id AND (i.outcome IS NULL OR i.outcome = 'implanted')
                  UNION ALL
                  SELECT q.item_id, $5::timestamptz, array_position($15::uuid[], q.item_id), q.kind
                    FROM picked q WHERE q.item_id <> p.item_id) o
           WHERE ${kindsMustFit('p.kind', 'o.kind')}) ELSE '[]'::json END,
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
      ) ORDER BY array_position($15::uuid[], p.item_id)) FROM picked p),
    'caseNumber', a.case_number,
    'side', a.side,
    'confirmedAt', CASE WHEN $11::text = 'confirmed' THEN ${iso('$5::timestamptz')} END,
    'revision', rev.revision,
    'open', true
  )::text AS body
  FROM rev, asked a
), new_call AS (
  INSERT INTO call (id, case_id, room_id, kind, needed_at, called_at, called_by, entered_by, confirmed_at, revision)
  SELECT $10::uuid, $9::uuid, rev.room_id, $11::text, $12::timestamptz, $5::timestamptz, $13::uuid, $1::uuid,
         CASE WHEN $11::text = 'confirmed' THEN $5::timestamptz END, rev.revision
    FROM rev
), new_items AS (
  INSERT INTO item (id, call_id, line_no, catalogue_item_id, category, side, hold, unit_id)
  SELECT p.item_id, $10::uuid, array_position($15::uuid[], p.item_id), p.product, p.category, p.side, 'held', p.unit_id
    FROM rev, picked p
), holds AS (
  UPDATE unit SET state = 'held', held_for = p.item_id FROM rev, picked p WHERE unit.id = p.unit_id
), new_event AS (
  INSERT INTO event (room_id, seq, type, at, case_id, call_id, actor_id, data)
  SELECT rev.room_id, rev.event_seq, 'call.called', rev.last_event_at, $9::uuid, $10::uuid, $1::uuid,
         json_build_object('kind', $11::text, 'neededAt', ${iso('$12::timestamptz')}, 'calledBy', $13::uuid,
           'items', (SELECT json_agg(json_build_object('itemId', p.item_id, 'label', p.label, 'variant', p.variant,
                       'hold', 'held', 'unitId', p.unit_id) ORDER BY array_position($15::uuid[], p.item_id)) FROM picked p))::jsonb
    FROM rev
), new_key AS (
  -- A rival with the same key breaks the whole statement here: nothing is half done.
  INSERT INTO idempotency_key (person_id, key, method, path, request_hash, status, answer, created_at)
  SELECT $1::uuid, $2::uuid, 'POST', $3::text, $4::bytea, 201, answer.body, $5::timestamptz FROM answer
)
SELECT a.room_id AS "roomId", answer.revision, answer.body FROM answer, asked a`
