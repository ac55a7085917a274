import { PART_KINDS } from '@bellpull/domain'

const KIND_ORDER = `array_position(ARRAY[${PART_KINDS.map((kind) => `'${kind}'`).join(', ')}], r.kind)`

/**
 * The rails of a case (`railView` of the contracts), as text: every size that is not of the wrong side, of the
 * systems in the case's plan, and of what belongs to no system (cement, drill bits, trays).
 *
 * Counted are packages that are usable on the case's day and held for nobody: in this case's room, and outside
 * every room. What lies in another room is nobody's to give. `heldElsewhere`: kept for other cases, not opened.
 *
 * $1 case, $2 time zone of the house. No row: no such case. Columns: `body`.
 */
export const RAILS = `
SELECT coalesce(json_agg(json_build_object(
         'kind', r.kind, 'label', r.part_name, 'system', r.system, 'sizes', r.sizes)
         ORDER BY r.system = '', r.system, ${KIND_ORDER}, r.part_name) FILTER (WHERE r.kind IS NOT NULL), '[]'::json
       )::text AS body
  FROM surgical_case c
  LEFT JOIN LATERAL (
    SELECT ci.kind, ci.part_name, coalesce(s.name, '') AS system,
           json_agg(json_build_object(
             'catalogueItemId', ci.id,
             'ref', ci.ref,
             'label', coalesce(ci.size, ci.label),
             'variant', ci.variant,
             'diameterMm', ci.diameter_mm,
             'heightMm', ci.height_mm,
             'side', ci.side,
             'inRoom', n.in_room,
             'inCore', n.in_core,
             'heldElsewhere', n.held_elsewhere,
             'stocked', ci.stocked,
             'soonestUseByOn', n.soonest
           ) ORDER BY ci.size_order, ci.variant NULLS FIRST, ci.ref) AS sizes
      FROM catalogue_item ci
      LEFT JOIN implant_system s ON s.id = ci.system_id
     CROSS JOIN LATERAL (
        SELECT count(*) FILTER (WHERE f.free AND f.place_room_id = c.room_id) AS in_room,
               count(*) FILTER (WHERE f.free AND f.place_room_id IS NULL) AS in_core,
               count(*) FILTER (WHERE f.held_for IS NOT NULL) AS held_elsewhere,
               min(f.use_by_on) FILTER (WHERE f.free) AS soonest
          FROM (SELECT u.place_room_id, u.use_by_on, NULL::uuid AS held_for, true AS free
                  FROM unit u
                 WHERE u.catalogue_item_id = ci.id AND u.state = 'available' AND u.sterile
                   AND u.use_by_on >= (c.starts_at AT TIME ZONE $2)::date
                   AND (u.place_room_id IS NULL OR u.place_room_id = c.room_id)
                UNION ALL
                SELECT u.place_room_id, u.use_by_on, u.held_for, false
                  FROM unit u
                  JOIN item i ON i.id = u.held_for
                  JOIN call k ON k.id = i.call_id
                 WHERE u.catalogue_item_id = ci.id AND u.held_for IS NOT NULL AND u.state <> 'opened'
                   AND k.case_id <> c.id) f
     ) n
     WHERE ci.active AND ci.side IN ('either', c.side)
       AND (ci.system_id IS NULL OR ci.system_id IN (SELECT p.system_id FROM case_plan_line p WHERE p.case_id = c.id))
     GROUP BY ci.kind, ci.part_name, s.name
  ) r ON true
 WHERE c.id = $1
 GROUP BY c.id`
