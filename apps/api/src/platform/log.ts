import { pino, type DestinationStream, type Logger } from 'pino'

export type { Logger } from 'pino'

/**
 * The log: one JSON line each, with ids and never names. What a body held, a token or a header that carries one
 * is never written.
 *
 * @param to where the lines go; standard output when left out.
 */
export function createLog(level: string, to?: DestinationStream): Logger {
  const options = {
    level,
    base: null,
    timestamp: pino.stdTimeFunctions.isoTime,
    formatters: { level: (label: string) => ({ level: label }) },
    serializers: { err: errorWithoutValues },
  }
  return to ? pino(options, to) : pino(options)
}

/** Where it went wrong and why, without the rows or parameters that a database error drags along. */
function errorWithoutValues(error: unknown): Record<string, unknown> {
  if (!(error instanceof Error)) return { message: String(error) }
  const { code, constraint, table } = error as { code?: unknown; constraint?: unknown; table?: unknown }
  return {
    type: error.name,
    message: error.message,
    stack: error.stack,
    ...(code !== undefined && { code }),
    ...(constraint !== undefined && { constraint }),
    ...(table !== undefined && { table }),
    ...(error.cause !== undefined && { cause: errorWithoutValues(error.cause) }),
  }
}
