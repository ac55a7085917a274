import { PROBLEMS, problemType, type ProblemCode, type ProblemDetails } from '@bellpull/contracts'
import type { ErrorRequestHandler } from 'express'
import type { Logger } from 'pino'
import { databaseFault, isAway } from '../db/sql.js'
import { traceIdOf } from './scope.js'

export interface ProblemOptions {
  readonly detail?: string
  readonly errors?: ReadonlyArray<{ pointer: string; message: string }>
  /** Further members of the body, for those who show or act on them. */
  readonly extra?: Record<string, unknown>
  readonly cause?: unknown
}

/** A refusal, or a failure, by its stable name. */
export class Problem extends Error {
  override readonly name = 'Problem'
  constructor(
    readonly code: ProblemCode,
    readonly options: ProblemOptions = {},
  ) {
    super(options.detail ? `${code}: ${options.detail}` : code, { cause: options.cause })
  }
}

/** Promises that the database keeps, and what it means to a client when one would have been broken. */
const CONSTRAINTS: Readonly<Record<string, ProblemCode>> = {
  unit_held_once: 'unit-held-elsewhere',
  item_unit_one_open: 'unit-held-elsewhere',
  call_read_back_by_another: 'own-call',
}

/** Values that no column takes: a NUL in a text, a number or a date out of range. */
const BAD_VALUE = ['22003', '22007', '22008', '22021', '22P05']

/** Cancelled by its time limit: the house is too busy, not wrong. */
const TOO_SLOW = '57014'

/** Whatever was thrown, as a problem. */
export function toProblem(error: unknown): Problem {
  if (error instanceof Problem) return error
  if (isAway(error)) return new Problem('unavailable', { cause: error })
  const fault = databaseFault(error)
  if (fault) {
    const code = CONSTRAINTS[fault.constraint ?? '']
    if (code) return new Problem(code, { cause: error })
    if (BAD_VALUE.includes(fault.code ?? '')) return new Problem('invalid-input', { cause: error })
    if (fault.code === TOO_SLOW) return new Problem('unavailable', { cause: error })
  }
  // A path whose percent signs mean nothing names nothing.
  if (error instanceof URIError) return new Problem('not-found', { cause: error })
  const reader = bodyReaderFault(error)
  if (reader) return new Problem(reader, { cause: error })
  return new Problem('unexpected', { cause: error })
}

/** What Express' body reader throws, by its `type`. */
function bodyReaderFault(error: unknown): ProblemCode | null {
  if (!(error instanceof Error) || !('type' in error) || !('status' in error)) return null
  if (error.type === 'entity.too.large') return 'body-too-large'
  return Number(error.status) < 500 ? 'malformed-body' : null
}

/** The RFC 9457 body of a problem. */
export function problemBody(problem: Problem, instance: string): ProblemDetails {
  const { status, title } = PROBLEMS[problem.code]
  const { detail, errors, extra } = problem.options
  return {
    ...extra,
    type: problemType(problem.code),
    title,
    status,
    ...(detail !== undefined && { detail }),
    instance,
    ...(errors !== undefined && { errors: [...errors] }),
  }
}

/**
 * Turns everything thrown into `application/problem+json`. A refusal is normal traffic: one line and never the
 * body that was sent. A failure says nothing internal and carries the trace id under which the log has it.
 */
export function problemHandler(log: Logger): ErrorRequestHandler {
  return (error, req, res, next) => {
    const problem = toProblem(error)
    const { status } = PROBLEMS[problem.code]
    const traceId = traceIdOf(req)
    const line = { traceId, problem: problem.code, status, method: req.method, path: req.path }
    if (status < 500) log.info({ event: 'http.refused', ...line }, problem.code)
    else log.error({ event: 'http.failed', ...line, err: problem.options.cause ?? problem }, problem.code)

    if (res.headersSent) {
      next(error)
      return
    }
    const body = problemBody(problem, req.originalUrl)
    if (status >= 500) body['traceId'] = traceId
    const retryAfterS = problem.options.extra?.['retryAfterS']
    if (typeof retryAfterS === 'number') res.setHeader('Retry-After', String(Math.ceil(retryAfterS)))
    res.status(status).type('application/problem+json').send(JSON.stringify(body))
  }
}
