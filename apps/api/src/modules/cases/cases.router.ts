import { caseCommand, casesQuery, id } from '@bellpull/contracts'
import { CASE_COMMANDS, type CaseCommandName } from '@bellpull/domain'
import { Router, type RequestHandler } from 'express'
import { z } from 'zod'
import { keyUseOf, sendStored } from '../../platform/http/idempotency.js'
import { parse } from '../../platform/http/parse.js'
import { actorOf, demand, permit } from '../../platform/http/session.js'
import { reasonOf } from './case-steps.js'
import type { CasesService } from './cases.service.js'

export interface CasesRouterDeps {
  readonly cases: CasesService
  /** The house's limit of calls and commands a person. */
  readonly limit: RequestHandler
  readonly readBody: RequestHandler
}

const path = z.object({ id })
const noQuery = z.strictObject({})

/** `GET /cases`, `GET /cases/:id`, `POST /cases/:id/commands`. */
export function casesRouter({ cases, limit, readBody }: CasesRouterDeps): Router {
  const router = Router()

  router.get('/cases', permit('cases.read'), async (req, res) => {
    const { on, room } = parse(casesQuery, req.query, 'query')
    res.type('application/json').send(await cases.list(on, room))
  })

  router.get('/cases/:id', permit('cases.read'), async (req, res) => {
    parse(noQuery, req.query, 'query')
    res.type('application/json').send(await cases.get(parse(path, req.params, 'path').id))
  })

  router.post('/cases/:id/commands', limit, readBody, async (req, res) => {
    const actor = actorOf(req)
    const name = commandName(req.body)
    if (name) demand(actor, `case.${name}`)
    const use = keyUseOf(req, { required: true })
    const answer = await cases.apply({
      actor,
      use,
      read: () => {
        parse(noQuery, req.query, 'query')
        const command = parse(caseCommand, req.body, 'body')
        if (command.name === 'reopen' || command.name === 'cancel') reasonOf(command)
        return { caseId: parse(path, req.params, 'path').id, command }
      },
    })
    sendStored(res, answer)
  })

  return router
}

/** The command that is asked for, as far as the table knows it: who may give it is asked before the rest is read. */
function commandName(body: unknown): CaseCommandName | null {
  const name: unknown = typeof body === 'object' && body !== null && 'name' in body ? body.name : null
  return CASE_COMMANDS.find((known) => known === name) ?? null
}
