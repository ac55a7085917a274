import type { Sql } from '../../../platform/db/sql.js'

/** The place where a room's packages stand, the hatch, or where packages wait to be looked at. */
export async function getPlace(
  sql: Sql,
  where: { roomId: string } | { zone: 'hatch' | 'quarantine' },
): Promise<string> {
  const { rows } = await sql.query<{ id: string }>(
    'roomId' in where
      ? {
          name: 'place-of-room',
          text: 'SELECT id FROM location WHERE room_id = $1 ORDER BY walk_order, code LIMIT 1',
          values: [where.roomId],
        }
      : {
          name: 'place-of-zone',
          text: 'SELECT id FROM location WHERE zone = $1 ORDER BY walk_order, code LIMIT 1',
          values: [where.zone],
        },
  )
  const place = rows[0]
  if (!place) throw new Error(`the house has no place for ${JSON.stringify(where)}`)
  return place.id
}
