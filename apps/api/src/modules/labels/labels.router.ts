import { parseLabel, type LabelView } from '@bellpull/contracts'
import { parseScan } from '@bellpull/domain'
import { Router, type RequestHandler } from 'express'
import type { Clock } from '../../platform/clock.js'
import { parse } from '../../platform/http/parse.js'
import { Problem } from '../../platform/http/problem.js'
import { permit } from '../../platform/http/session.js'

export interface LabelsRouterDeps {
  readonly clock: Clock
  readonly idempotent: RequestHandler
}

/** `POST /labels/parse`: what a scan says, without a look at the stock. */
export function labelsRouter({ clock, idempotent }: LabelsRouterDeps): Router {
  const router = Router()

  router.post('/labels/parse', permit('labels.parse'), idempotent, (req, res) => {
    const { scan } = parse(parseLabel, req.body, 'body')
    const read = parseScan(scan, clock.today())
    if (!read.ok)
      throw new Problem('label-unreadable', { detail: read.detail, extra: { reason: read.reason } })
    res.json({ ...read.label, warnings: [...read.label.warnings] } satisfies LabelView)
  })

  return router
}
