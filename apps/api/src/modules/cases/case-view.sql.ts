import { isoSql } from '../../platform/db/json.js'

/**
 * Cases as clients receive them (`caseView` of the contracts), as rows of JSON text in order of start.
 *
 * $1 is the house's time zone: the place among the room's cases of the day is counted by its days.
 *
 * @param where condition over `c` (surgical_case); may use parameters from $2.
 */
export const casesSql = (where: string): string => `
SELECT json_build_object(
         'id', c.id,
         'caseNumber', c.case_number,
         'room', json_build_object('id', r.id, 'number', r.number),
         'startsAt', ${isoSql('c.starts_at')},
         'status', c.status,
         'procedure', json_build_object('kind', c.procedure_kind, 'label', c.procedure_label),
         'side', c.side,
         'surgeon', json_build_object('id', s.id, 'name', s.name),
         'team', (
           SELECT coalesce(json_agg(json_build_object(
                    'id', p.id, 'name', p.name, 'role', p.role, 'initials', p.initials)
                    ORDER BY array_position(ARRAY['surgeon', 'scrub', 'circulator'], p.role), p.name), '[]'::json)
             FROM case_member m JOIN person p ON p.id = m.person_id
            WHERE m.case_id = c.id),
         'linkedCaseId', c.linked_case_id,
         'plan', (
           SELECT coalesce(json_agg(json_build_object(
                    'kind', l.kind, 'system', y.name, 'variant', l.variant, 'planned', l.planned,
                    'from', l.size_from, 'to', l.size_to, 'hint', l.hint) ORDER BY l.line_no), '[]'::json)
             FROM case_plan_line l JOIN implant_system y ON y.id = l.system_id
            WHERE l.case_id = c.id),
         'ofDay', (
           SELECT json_build_object(
                    'position', count(*) FILTER (WHERE (d.starts_at, d.id) <= (c.starts_at, c.id)),
                    'total', count(*))
             FROM surgical_case d
            WHERE d.room_id = c.room_id
              AND d.starts_at >= day.start AT TIME ZONE $1
              AND d.starts_at < (day.start + interval '1 day') AT TIME ZONE $1),
         'startedAt', ${isoSql('c.started_at')},
         'timeOutAt', ${isoSql('c.time_out_at')},
         'timeOutEndedAt', ${isoSql('c.time_out_ended_at')},
         'patientOutAt', ${isoSql('c.patient_out_at')},
         'closedAt', ${isoSql('c.closed_at')},
         'version', c.version
       )::text AS body
  FROM surgical_case c
  JOIN room r ON r.id = c.room_id
  JOIN person s ON s.id = c.surgeon_id
 CROSS JOIN LATERAL (SELECT date_trunc('day', c.starts_at AT TIME ZONE $1) AS start) day
 WHERE ${where}
 ORDER BY c.starts_at, r.number, c.id`

/** One case. $2 its id. */
export const CASE_BY_ID = casesSql('c.id = $2')

/** The cases of some days. $2 from, $3 to (exclusive), $4 room or null for every room. */
export const CASES_OF_DAYS = casesSql(
  'c.starts_at >= $2 AND c.starts_at < $3 AND ($4::uuid IS NULL OR c.room_id = $4::uuid)',
)
