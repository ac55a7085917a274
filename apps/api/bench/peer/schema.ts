import { CALLERS, idSql, PRODUCTS, ROOMS, SURGEONS } from '../world.js'

/** The peer's own tables: no more than the job needs, every reference a foreign key. */
export const PEER_SCHEMA = `
CREATE TABLE room (id uuid PRIMARY KEY, number int NOT NULL, revision int NOT NULL DEFAULT 0) WITH (fillfactor = 50);
CREATE TABLE person (id uuid PRIMARY KEY, initials text NOT NULL, name text NOT NULL, role text NOT NULL);
CREATE TABLE surgical_case (
  id uuid PRIMARY KEY, room_id uuid NOT NULL REFERENCES room, number text NOT NULL, side text NOT NULL, status text NOT NULL);
CREATE TABLE product (id uuid PRIMARY KEY, label text NOT NULL, ref text NOT NULL, gtin text NOT NULL);
CREATE TABLE unit (
  id uuid PRIMARY KEY, product_id uuid NOT NULL REFERENCES product, lot text NOT NULL, serial text NOT NULL,
  use_by_on date NOT NULL, place text NOT NULL, held_for uuid) WITH (fillfactor = 80);
CREATE INDEX unit_free ON unit (product_id, use_by_on, id) WHERE held_for IS NULL;
CREATE UNIQUE INDEX unit_held_once ON unit (held_for) WHERE held_for IS NOT NULL;
CREATE TABLE call (
  id uuid PRIMARY KEY, case_id uuid NOT NULL REFERENCES surgical_case, room_id uuid NOT NULL REFERENCES room,
  kind text NOT NULL, needed_at timestamptz, called_at timestamptz NOT NULL,
  called_by uuid NOT NULL REFERENCES person, entered_by uuid NOT NULL REFERENCES person, revision int NOT NULL);
CREATE INDEX call_by_case ON call (case_id);
CREATE TABLE item (
  id uuid PRIMARY KEY, call_id uuid NOT NULL REFERENCES call, line_no smallint NOT NULL,
  product_id uuid NOT NULL REFERENCES product, unit_id uuid NOT NULL REFERENCES unit);
CREATE INDEX item_by_call ON item (call_id);
CREATE UNIQUE INDEX item_unit_once ON item (unit_id);
ALTER TABLE unit ADD FOREIGN KEY (held_for) REFERENCES item;
CREATE TABLE event (
  room_id uuid NOT NULL REFERENCES room, revision int NOT NULL, type text NOT NULL, at timestamptz NOT NULL,
  call_id uuid NOT NULL REFERENCES call, actor_id uuid NOT NULL REFERENCES person, data text NOT NULL,
  PRIMARY KEY (room_id, revision));
CREATE TABLE idempotency_key (
  person_id uuid NOT NULL REFERENCES person, key uuid NOT NULL, request_hash bytea NOT NULL, answer text NOT NULL,
  PRIMARY KEY (person_id, key));
`

/** Fills the peer's house. @returns statements to run in order. */
export const fillPeer = (cases: number, unitsAProduct: number): string[] => [
  `INSERT INTO room SELECT ${idSql('room', 'n')}, n FROM generate_series(1, ${ROOMS}) n`,
  `INSERT INTO person SELECT ${idSql('person', 'n')}, 'P' || n, 'Person ' || n,
          CASE WHEN n <= ${SURGEONS} THEN 'surgeon' ELSE 'circulator' END
     FROM generate_series(1, ${SURGEONS + CALLERS}) n`,
  `INSERT INTO surgical_case SELECT ${idSql('case', 'n')}, ${idSql('room', `(n - 1) % ${ROOMS} + 1`)}, 'C-' || n,
          'left', 'inProgress' FROM generate_series(1, ${cases}) n`,
  `INSERT INTO product SELECT ${idSql('product', 'n')}, CASE n % 2 WHEN 1 THEN 'Head ' ELSE 'Stem ' END || n,
          'R-' || n, lpad(n::text, 14, '0') FROM generate_series(1, ${PRODUCTS}) n`,
  `INSERT INTO unit SELECT gen_random_uuid(), ${idSql('product', 'p')}, 'L' || u, 'S' || u,
          current_date + 60 + (random() * 900)::int, 'B-' || u % 40 + 1, NULL
     FROM generate_series(1, ${unitsAProduct}) u, generate_series(1, ${PRODUCTS}) p`,
]

/**
 * A call in one statement: the first to expire of each product, locked past everybody else's; room, call, items,
 * holds, event and key. No row comes back when the case is not open or a product has none left.
 *
 * $1 person, $2 key, $3 request hash, $4 now, $5 case, $6 call, $7 kind, $8 needed at, $9 called by, $10 item ids,
 * $11 their products.
 */
export const PEER_CALL = `
WITH picked AS MATERIALIZED (
  SELECT w.n, w.item_id, p.id AS product_id, p.label, p.ref, p.gtin, u.*
    FROM unnest($10::uuid[], $11::uuid[]) WITH ORDINALITY w(item_id, product_id, n)
    JOIN product p ON p.id = w.product_id
   CROSS JOIN LATERAL (SELECT f.id AS unit_id, f.lot, f.serial, f.use_by_on, f.place FROM unit f
                        WHERE f.product_id = w.product_id AND f.held_for IS NULL AND f.use_by_on >= $4::timestamptz::date
                        ORDER BY f.use_by_on, f.id LIMIT 1 FOR UPDATE SKIP LOCKED) u
), rev AS (
  UPDATE room r SET revision = r.revision + 1
    FROM surgical_case k
   WHERE k.id = $5::uuid AND k.status = 'inProgress' AND r.id = k.room_id
     AND (SELECT count(*) FROM picked) = cardinality($10::uuid[])
  RETURNING r.id AS room_id, r.number, r.revision, k.side, k.number AS case_number
), answer AS MATERIALIZED (
  SELECT rev.room_id, rev.revision, json_build_object(
    'id', $6::uuid, 'caseId', $5::uuid, 'room', json_build_object('id', rev.room_id, 'number', rev.number),
    'kind', $7::text, 'neededAt', $8::timestamptz, 'calledAt', $4::timestamptz,
    'calledBy', (SELECT json_build_object('id', id, 'initials', initials, 'name', name, 'role', role) FROM person WHERE id = $9::uuid),
    'enteredBy', (SELECT json_build_object('id', id, 'initials', initials, 'name', name, 'role', role) FROM person WHERE id = $1::uuid),
    'caseNumber', rev.case_number, 'side', rev.side, 'revision', rev.revision, 'version', 1,
    'items', (SELECT json_agg(json_build_object('id', item_id, 'catalogueItemId', product_id, 'label', label, 'ref', ref,
       'stage', 'called', 'hold', 'held', 'unit', json_build_object('id', unit_id, 'gtin', gtin, 'lot', lot,
       'serial', serial, 'useByOn', use_by_on, 'place', place)) ORDER BY n) FROM picked))::text AS body
    FROM rev
), new_call AS (
  INSERT INTO call SELECT $6, $5, room_id, $7, $8, $4, $9, $1, revision FROM answer
), new_items AS (
  INSERT INTO item SELECT item_id, $6, n, product_id, unit_id FROM answer, picked
), holds AS (
  UPDATE unit SET held_for = p.item_id FROM answer, picked p WHERE unit.id = p.unit_id
), new_event AS (
  INSERT INTO event SELECT room_id, revision, 'call.called', $4, $6, $1, body FROM answer
), new_key AS (
  INSERT INTO idempotency_key SELECT $1, $2, $3::bytea, body FROM answer
)
SELECT room_id AS "roomId", revision, body FROM answer`
