import { PART_KINDS, mustFit } from '@bellpull/domain'

/** An instant as clients read it: UTC, milliseconds, `Z`. */
export const iso = (column: string): string =>
  `to_char(${column} AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"')`

/** A person as `personRef` of the contracts; SQL null stays null. */
export const person = (alias: string): string =>
  `json_build_object('id', ${alias}.id, 'initials', ${alias}.initials, 'name', ${alias}.name, 'role', ${alias}.role)`

const optionalPerson = (alias: string): string =>
  `CASE WHEN ${alias}.id IS NOT NULL THEN ${person(alias)} END`

/** Kinds of part that must fit each other, as rows of SQL; the table itself stands in the domain. */
const PARTNER_ROWS = PART_KINDS.flatMap((a) =>
  PART_KINDS.filter((b) => mustFit(a, b)).map((b) => `('${a}', '${b}')`),
).join(', ')

/** Whether two kinds of part, given as SQL expressions, must fit each other. */
export const kindsMustFit = (a: string, b: string): string => `(${a}, ${b}) IN (${PARTNER_ROWS})`

/** A usable package that is held for nobody, seen from a room; `today` and `room` are SQL expressions. */
const free = (unit: string, today: string): string =>
  `${unit}.state = 'available' AND ${unit}.sterile AND ${unit}.use_by_on >= ${today}`

/** The nearest sizes of the same system that have a free package: facts for the surgeon, nearest first. */
const alternatives = (today: string): string => `
  (SELECT coalesce(json_agg(json_build_object(
            'catalogueItemId', o.id,
            'label', concat_ws(' ', o.label, o.variant),
            'inRoom', o.in_room, 'inCore', o.in_core) ORDER BY o.step, o.other_variant, o.size_order), '[]'::json)
     FROM (SELECT a.id, a.label, a.variant, a.size_order, abs(a.size_order - ci.size_order) AS step,
                  (a.variant IS DISTINCT FROM ci.variant)::int AS other_variant,
                  count(*) FILTER (WHERE u.place_room_id IS NOT NULL) AS in_room,
                  count(*) FILTER (WHERE u.place_room_id IS NULL) AS in_core
             FROM catalogue_item a
             JOIN unit u ON u.catalogue_item_id = a.id AND ${free('u', today)}
                        AND (u.place_room_id IS NULL OR u.place_room_id = c.room_id)
            WHERE a.system_id = ci.system_id AND a.kind = ci.kind AND a.id <> ci.id AND a.active
              AND a.side IN ('either', k.side)
              AND (ci.kind NOT IN ('liner', 'insert') OR a.group_code IS NOT DISTINCT FROM ci.group_code)
              AND a.type_code IS NOT DISTINCT FROM ci.type_code
            GROUP BY a.id
            ORDER BY step, other_variant, a.size_order
            LIMIT 4) o)`

/** Everybody for whom a package of the same product is kept and not yet opened. */
const HELD_BY = `
  (SELECT coalesce(json_agg(json_build_object(
            'room', json_build_object('id', hr.id, 'number', hr.number), 'kind', hc.kind)
            ORDER BY hr.number, hc.called_at), '[]'::json)
     FROM unit hu
     JOIN item hi ON hi.id = hu.held_for
     JOIN call hc ON hc.id = hi.call_id
     JOIN room hr ON hr.id = hc.room_id
    WHERE hu.catalogue_item_id = i.catalogue_item_id AND hu.held_for IS NOT NULL AND hu.state <> 'opened')`

/** Other parts of the case that this one must fit. No rule has been run on them, and the answer says so. */
const PAIRS = `
  (SELECT coalesce(json_agg(json_build_object('itemId', p.id, 'result', 'notChecked')
            ORDER BY pc.called_at, p.line_no), '[]'::json)
     FROM call pc
     JOIN item p ON p.call_id = pc.id
     JOIN catalogue_item pci ON pci.id = p.catalogue_item_id
    WHERE pc.case_id = c.case_id AND p.id <> i.id
      AND (p.outcome IS NULL OR p.outcome = 'implanted')
      AND ${kindsMustFit('ci.kind', 'pci.kind')})`

/**
 * Calls as clients receive them (`callView` of the contracts), as text made by PostgreSQL.
 *
 * @param where condition over `c` (call); may use parameters from $2. $1 is the house's day.
 * @returns SQL with columns `id`, `roomId`, `revision`, `body` (JSON text).
 */
export const callViewSql = (where: string): string => `
SELECT c.id, c.room_id AS "roomId", c.revision, json_build_object(
  'id', c.id,
  'caseId', c.case_id,
  'room', json_build_object('id', r.id, 'number', r.number),
  'kind', c.kind,
  'neededAt', ${iso('c.needed_at')},
  'calledAt', ${iso('c.called_at')},
  'calledBy', ${person('cb')},
  'enteredBy', ${person('eb')},
  'readBack', CASE WHEN rb.id IS NOT NULL THEN json_build_object('by', ${person('rb')}, 'at', ${iso('c.read_back_at')}) END,
  'version', c.version,
  'items', items.list,
  'caseNumber', k.case_number,
  'side', k.side,
  'confirmedAt', ${iso('c.confirmed_at')},
  'revision', c.revision,
  'open', c.open
)::text AS body
FROM call c
JOIN surgical_case k ON k.id = c.case_id
JOIN room r ON r.id = c.room_id
JOIN person cb ON cb.id = c.called_by
JOIN person eb ON eb.id = c.entered_by
LEFT JOIN person rb ON rb.id = c.read_back_by
CROSS JOIN LATERAL (
  SELECT json_agg(json_build_object(
    'id', i.id,
    'callId', i.call_id,
    'catalogueItemId', i.catalogue_item_id,
    'category', i.category,
    'ref', coalesce(ci.ref, ''),
    'label', coalesce(ci.label, i.text),
    'variant', ci.variant,
    'side', i.side,
    'stage', i.stage,
    'outcome', i.outcome,
    'hold', i.hold,
    'unit', CASE WHEN u.id IS NOT NULL THEN json_build_object(
      'id', u.id, 'gtin', ci.gtin, 'lot', u.lot, 'serial', u.serial, 'useByOn', u.use_by_on,
      'location', json_build_object('id', l.id, 'code', l.code, 'zone', l.zone)) END,
    'alternatives', CASE WHEN i.hold = 'noneFree' AND i.outcome IS NULL THEN ${alternatives('$1::date')} ELSE '[]'::json END,
    'heldBy', CASE WHEN i.hold = 'noneFree' AND i.outcome IS NULL THEN ${HELD_BY} ELSE '[]'::json END,
    'pairs', CASE WHEN i.category = 'implant' AND i.outcome IS NULL THEN ${PAIRS} ELSE '[]'::json END,
    'acceptedBy', ${optionalPerson('ab')},
    'offeredTo', ${optionalPerson('ot')},
    'openedUnverified', i.opened_unverified,
    'version', i.version,
    'kind', coalesce(ci.kind, 'other'),
    'partName', coalesce(ci.part_name, 'Something else'),
    'size', ci.size,
    'system', s.name,
    'acceptedAt', ${iso('i.accepted_at')},
    'pulledAt', ${iso('i.pulled_at')},
    'inRoomAt', ${iso('i.in_room_at')},
    'verifiedAt', ${iso('i.verified_at')},
    'openedAt', ${iso('i.opened_at')},
    'settledAt', ${iso('i.settled_at')},
    'typed', i.typed,
    'reason', i.reason,
    'putBack', CASE WHEN i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL THEN json_build_object(
      'toCode', pb.code, 'since', ${iso('i.put_back_since')}, 'inspect', i.put_back_inspect, 'walkOrder', pb.walk_order) END,
    'walkOrder', l.walk_order,
    'replacesItemId', i.replaces_item_id
  ) ORDER BY i.line_no) AS list
  FROM item i
  LEFT JOIN catalogue_item ci ON ci.id = i.catalogue_item_id
  LEFT JOIN implant_system s ON s.id = ci.system_id
  LEFT JOIN unit u ON u.id = i.unit_id
  LEFT JOIN location l ON l.id = u.location_id
  LEFT JOIN location pb ON pb.id = i.put_back_to
  LEFT JOIN person ab ON ab.id = i.accepted_by
  LEFT JOIN person ot ON ot.id = i.offered_to
  WHERE i.call_id = c.id
) items
WHERE ${where}`

/** One call, $2 its id. */
export const CALL_VIEW_BY_IDS = callViewSql('c.id = ANY($2::uuid[])')
