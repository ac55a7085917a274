import { id } from '@bellpull/contracts'
import { Router } from 'express'
import { z } from 'zod'
import type { BoardService } from './board.service.js'
import { parse } from '../../platform/http/parse.js'
import { Problem } from '../../platform/http/problem.js'
import { permit } from '../../platform/http/session.js'

const path = z.object({ id })
const noQuery = z.strictObject({})

/** `GET /board`, and the calls of one case. */
export function boardRouter(board: BoardService): Router {
  const router = Router()

  router.get('/board', permit('board.read'), async (req, res) => {
    parse(noQuery, req.query, 'query')
    res.type('application/json').send(await board.snapshot())
  })

  router.get('/cases/:id/calls', permit('cases.read'), async (req, res) => {
    parse(noQuery, req.query, 'query')
    const calls = await board.findCallsOfCase(parse(path, req.params, 'path').id)
    if (calls === null) throw new Problem('not-found')
    res.type('application/json').send(calls)
  })

  return router
}
