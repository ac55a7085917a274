import type { RequestHandler } from 'express'
import type { Logger } from 'pino'
import { traceIdOf } from './scope.js'
import { actorOf } from './session.js'

/** What tells a case's number with its day and room: together that is data of a patient. */
const TELLS_CASES = /^\/(cases|board|events)(\/|$)/

/** Keeps who read what of a case, by ids and never by names: one line a reading, refused ones too. */
export function logReadings(log: Logger): RequestHandler {
  return (req, res, next) => {
    if (req.method === 'GET' && TELLS_CASES.test(req.path)) {
      const { id } = actorOf(req)
      const read = req.originalUrl
      res.on('finish', () => {
        log.info({ event: 'case.read', traceId: traceIdOf(req), personId: id, read, status: res.statusCode })
      })
    }
    next()
  }
}
