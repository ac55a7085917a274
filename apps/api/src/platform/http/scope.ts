import { randomUUID } from 'node:crypto'
import type { Request, RequestHandler } from 'express'

const traceIds = new WeakMap<Request, string>()

/** Gives every request a name of its own, under which the log and a failure's answer have it. */
export const requestScope: RequestHandler = (req, res, next) => {
  const traceId = randomUUID()
  traceIds.set(req, traceId)
  res.setHeader('X-Trace-Id', traceId)
  next()
}

/** The name of this request in the log. */
export const traceIdOf = (req: Request): string => traceIds.get(req) ?? 'none'
