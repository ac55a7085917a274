import type { HouseView, MeView } from '@bellpull/contracts'
import { Router } from 'express'
import { z } from 'zod'
import { boundsOfDay, type Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { parse } from '../../platform/http/parse.js'
import { actorOf } from '../../platform/http/session.js'

export interface MeRouterDeps {
  readonly database: Database
  readonly clock: Clock
  readonly houseZone: string
}

/** `GET /me`: who is signed in, and in which rooms they work today. */
export function meRouter({ database, clock, houseZone }: MeRouterDeps): Router {
  const router = Router()

  router.get('/me', async (req, res) => {
    parse(z.strictObject({}), req.query, 'query')
    const { id, name, initials, role } = actorOf(req)
    const { from, to } = boundsOfDay(houseZone, clock.today())
    const { rows } = await database.query<{ id: string; number: number }>({
      text: `SELECT DISTINCT r.id, r.number
               FROM case_member m
               JOIN surgical_case k ON k.id = m.case_id
               JOIN room r ON r.id = k.room_id
              WHERE m.person_id = $1 AND k.status <> 'cancelled' AND k.starts_at >= $2 AND k.starts_at < $3
              ORDER BY r.number`,
      values: [id, from, to],
    })
    const house = { zone: houseZone, today: clock.today(), ...(await settings(database)) }
    res.json({ id, name, initials, role, house, rooms: rows } satisfies MeView)
  })

  return router
}

type Settings = Pick<HouseView, 'sizingArithmetic' | 'secondCheckMethods'>

/** Start values: the arithmetic is off until a house turns it on. */
const DEFAULTS: Settings = { sizingArithmetic: false, secondCheckMethods: ['pin', 'spoken'] }

async function settings(database: Database): Promise<Settings> {
  const { rows } = await database.query<{ key: keyof Settings; value: never }>({
    name: 'settings-for-screens',
    text: 'SELECT key, value FROM house_setting WHERE key = ANY($1)',
    values: [Object.keys(DEFAULTS)],
  })
  return { ...DEFAULTS, ...Object.fromEntries(rows.map(({ key, value }) => [key, value])) }
}
