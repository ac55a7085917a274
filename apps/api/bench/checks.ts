import { administer } from '../dev/administer.js'

interface Counts {
  readonly lost: number
  readonly doubled: number
  readonly broken: number
  readonly gaps: number
}

/** What must never be found. $1: the ids of every call that was answered 201, one a tap. */
const CHECK = `
WITH acknowledged AS MATERIALIZED (SELECT id FROM unnest($1::uuid[]) x(id)),
     answered AS MATERIALIZED (SELECT (answer::json ->> 'id')::uuid AS id, count(*) AS n FROM idempotency_key GROUP BY 1),
     held AS MATERIALIZED (SELECT i.call_id, count(*) AS n FROM item i
                             JOIN unit u ON u.id = i.unit_id AND u.held_for = i.id AND u.state = 'held' GROUP BY 1),
     told AS MATERIALIZED (SELECT call_id, count(*) AS n FROM event WHERE type = 'call.called' GROUP BY 1)
SELECT (SELECT count(*) FROM acknowledged a LEFT JOIN call c USING (id) WHERE c.id IS NULL)::int AS lost,
       ((SELECT count(*) - count(DISTINCT id) FROM acknowledged)
      + (SELECT count(*) FROM call c LEFT JOIN acknowledged a USING (id) WHERE c.open AND a.id IS NULL)
      + (SELECT count(*) FROM (SELECT unit_id FROM item WHERE outcome IS NULL AND unit_id IS NOT NULL
                                GROUP BY unit_id HAVING count(*) > 1) twice))::int AS doubled,
       (SELECT count(*) FROM call c LEFT JOIN held ON held.call_id = c.id LEFT JOIN told ON told.call_id = c.id
          LEFT JOIN answered ON answered.id = c.id
         WHERE c.open AND (held.n IS DISTINCT FROM 2 OR told.n IS DISTINCT FROM 1 OR answered.n IS DISTINCT FROM 1))::int AS broken,
       (SELECT count(*) FROM room r JOIN (SELECT room_id, count(*) AS n, max(seq) AS last FROM event GROUP BY 1) e
            ON e.room_id = r.id WHERE r.event_seq <> e.n OR r.event_seq <> e.last)::int AS gaps`

/**
 * Looks through a house of the product after the load: is every call there that was acknowledged, and none that was
 * not; is every package held once, and every call whole; has no room's log a gap?
 *
 * @returns how much is wrong, and in words what was looked at.
 */
export async function checkHouse(
  url: string,
  acknowledged: readonly string[],
): Promise<{ wrong: number; words: string }> {
  const [counts] = (await administer(url, CHECK, [acknowledged])) as [Counts]
  const { lost, doubled, broken, gaps } = counts
  return {
    wrong: lost + doubled + broken + gaps,
    words: `${acknowledged.length} calls: ${lost} lost, ${doubled} doubled, ${broken} not whole; ${gaps} logs with gaps`,
  }
}
