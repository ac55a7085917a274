import { headQuery, type headView } from '@bellpull/contracts'
import { headCapFromRatio } from '@bellpull/domain'
import { Router } from 'express'
import type { z } from 'zod'
import { parse } from '../../platform/http/parse.js'
import { permit } from '../../platform/http/session.js'

/** `GET /sizing/head`: the geometry of a head, in mm, as arithmetic; it advises nothing. */
export function sizingRouter(): Router {
  const router = Router()

  router.get('/sizing/head', permit('sizing.read'), (req, res) => {
    const { diameterMm, ratio } = parse(headQuery, req.query, 'query')
    const { radiusMm, heightMm } = headCapFromRatio(diameterMm, ratio)
    res.json({ radiusMm, heightMm } satisfies z.infer<typeof headView>)
  })

  return router
}
