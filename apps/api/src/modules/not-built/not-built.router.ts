import { Router } from 'express'
import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { keyUseOf, storedAnswer } from '../../platform/http/idempotency.js'
import { Problem } from '../../platform/http/problem.js'
import { actorOf } from '../../platform/http/session.js'
import type { LaterRoute } from './routes.js'

export interface NotBuiltRouterDeps {
  readonly database: Database
  readonly clock: Clock
}

/**
 * Promised routes of later releases: they refuse whom they will refuse, and say to everybody else that there is
 * nothing here yet. Whoever builds one takes its line out of the table.
 */
export function notBuiltRouter(
  routes: readonly LaterRoute[],
  { database, clock }: NotBuiltRouterDeps,
): Router {
  const router = Router()
  for (const route of routes) {
    for (const method of route.methods) {
      router[method](route.path, async (req) => {
        if (!route.allows(actorOf(req).role, req.body)) throw new Problem('not-permitted')
        if (method !== 'get') {
          const use = keyUseOf(req, { required: route.keyRequired ?? false })
          if (use) await database.transaction((sql) => storedAnswer(sql, use, clock.now()))
        }
        throw new Problem('not-found', { detail: 'This comes with a later release.' })
      })
    }
  }
  return router
}
