import { CALL_COMMAND_BODIES, ITEM_COMMAND_BODIES, id, makeCall } from '@bellpull/contracts'
import {
  CALL_COMMANDS,
  ITEM_COMMANDS,
  callCommandPermission,
  itemCommandPermission,
  type CallPermission,
  type Role,
} from '@bellpull/domain'
import { Router, type Request, type RequestHandler } from 'express'
import { z } from 'zod'
import type { CallCommandInput, CallCommands, ItemCommandInput } from './call-commands.js'
import type { CallTransaction, Tap } from './call-transaction.js'
import type { CallMaker } from './make-call.js'
import { keyUseOf, sendStored } from '../../platform/http/idempotency.js'
import { parse } from '../../platform/http/parse.js'
import { Problem } from '../../platform/http/problem.js'
import { actorOf, permit } from '../../platform/http/session.js'

const path = z.object({ id })

export interface CallsRouterDeps {
  readonly maker: CallMaker
  readonly commands: CallCommands
  readonly transaction: CallTransaction
  /** Reads the JSON body; runs after the person is known. */
  readonly body: RequestHandler
  /** The house's limit of calls and commands a person. */
  readonly limit: RequestHandler
}

/** Calls are made, and commands given to calls and items. Everything else about them is read elsewhere. */
export function callsRouter({ maker, commands, transaction, body, limit }: CallsRouterDeps): Router {
  const router = Router()

  router.post('/cases/:id/calls', limit, body, permit('call.make'), async (req, res) => {
    const tap = tapOf(req)
    const input = await parseOrReplay(transaction, tap, makeCall, req.body)
    const { id: caseId } = parse(path, req.params, 'path')
    sendStored(res, await maker.make(tap, caseId, input))
  })

  router.post('/calls/:id/commands', limit, body, async (req, res) => {
    const name = demandCommand(req, CALL_COMMANDS, callCommandPermission)
    const tap = tapOf(req)
    const schema = name === null ? nameOnly(CALL_COMMANDS) : CALL_COMMAND_BODIES[name]
    const input = (await parseOrReplay(transaction, tap, schema, req.body)) as CallCommandInput
    const { id: callId } = parse(path, req.params, 'path')
    sendStored(res, await commands.onCall(tap, callId, input))
  })

  router.post('/items/:id/commands', limit, body, async (req, res) => {
    const name = demandCommand(req, ITEM_COMMANDS, itemCommandPermission)
    const tap = tapOf(req)
    const schema = name !== null && name in ITEM_COMMAND_BODIES ? bodyOf(name) : nameOnly(ITEM_COMMANDS)
    const input = (await parseOrReplay(transaction, tap, schema, req.body)) as ItemCommandInput
    const { id: itemId } = parse(path, req.params, 'path')
    sendStored(res, await commands.onItem(tap, itemId, input))
  })

  return router
}

const bodyOf = (name: string): z.ZodType => ITEM_COMMAND_BODIES[name as keyof typeof ITEM_COMMAND_BODIES]

/** For a command without a known name: says so, and nothing else. */
const nameOnly = (names: readonly [string, ...string[]]): z.ZodType => z.looseObject({ name: z.enum(names) })

/**
 * The command's name when the table knows it, `null` when it does not.
 *
 * @throws {Problem} `not-permitted` by the command's row, or when the role has no command here at all;
 *   `not-found` for a command that this release cannot do.
 */
function demandCommand<N extends string>(
  req: Request,
  names: readonly N[],
  permission: (name: N, role: Role) => CallPermission,
): N | null {
  const { role } = actorOf(req)
  const given: unknown = (req.body as { name?: unknown } | undefined)?.name
  const name = names.find((known) => known === given) ?? null
  if (name === null) {
    if (names.every((known) => wrongRole(permission(known, role)))) throw new Problem('not-permitted')
    return null
  }
  const allowed = permission(name, role)
  if (wrongRole(allowed)) throw new Problem('not-permitted')
  if (!allowed.ok) throw new Problem('not-found', { detail: 'This house cannot do that yet.' })
  return name
}

const wrongRole = (allowed: CallPermission): boolean => !allowed.ok && allowed.because === 'wrong-role'

const tapOf = (req: Request): Tap => ({ actor: actorOf(req), use: keyUseOf(req, { required: true }) })

/** A key that is taken is answered before the body is looked at; looking it up costs only refused bodies. */
async function parseOrReplay<S extends z.ZodType>(
  transaction: CallTransaction,
  tap: Tap,
  schema: S,
  body: unknown,
): Promise<z.output<S>> {
  try {
    return parse(schema, body, 'body')
  } catch (error) {
    await transaction.replay(tap)
    throw error
  }
}
