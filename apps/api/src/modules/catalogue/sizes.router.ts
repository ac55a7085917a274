import { id } from '@bellpull/contracts'
import { Router } from 'express'
import { z } from 'zod'
import type { Database } from '../../platform/db/sql.js'
import { parse } from '../../platform/http/parse.js'
import { Problem } from '../../platform/http/problem.js'
import { permit } from '../../platform/http/session.js'
import { RAILS } from './rails.sql.js'

export interface SizesRouterDeps {
  readonly database: Database
  readonly houseZone: string
}

/** `GET /cases/:id/sizes`: what could be called for a case, and how much of it there is. */
export function sizesRouter({ database, houseZone }: SizesRouterDeps): Router {
  const router = Router()

  router.get('/cases/:id/sizes', permit('sizes.read'), async (req, res) => {
    parse(z.strictObject({}), req.query, 'query')
    const path = parse(z.object({ id }), req.params, 'path')
    const { rows } = await database.query<{ body: string }>({
      name: 'rails',
      text: RAILS,
      values: [path.id, houseZone],
    })
    const found = rows[0]
    if (!found) throw new Problem('not-found')
    res.type('application/json').send(found.body)
  })

  return router
}
