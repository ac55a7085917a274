import { eventsQuery } from '@bellpull/contracts'
import { Router } from 'express'
import type { EventsService } from './events.service.js'
import { parse } from '../../platform/http/parse.js'
import { actorOf, demand } from '../../platform/http/session.js'

const PAGE = 100

/** `GET /events`: of a case or call for everybody, of the whole house for a few. */
export function eventsRouter(events: EventsService): Router {
  const router = Router()
  router.get('/events', async (req, res) => {
    const ofCase = req.query['case'] !== undefined || req.query['call'] !== undefined
    demand(actorOf(req), ofCase ? 'events.readCase' : 'events.readHouse')
    const query = parse(eventsQuery, req.query, 'query')
    res.json(
      await events.page({
        caseId: query.case,
        callId: query.call,
        after: query.after,
        limit: query.limit ?? PAGE,
      }),
    )
  })
  return router
}
