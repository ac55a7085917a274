import type { z } from 'zod'
import { Problem } from './problem.js'

export type Where = 'path' | 'query' | 'body'

/**
 * Crosses the trust boundary: unknown in, the contract's type out.
 *
 * @throws {Problem} `invalid-input` with a JSON pointer (RFC 6901, into the body or the query) for every fault;
 *   for the path `not-found`, for what is no id names nothing.
 */
export function parse<S extends z.ZodType>(schema: S, input: unknown, where: Where): z.output<S> {
  const result = schema.safeParse(input ?? {}, { error: inPlainWords, reportInput: true })
  if (result.success) return result.data
  if (where === 'path') throw new Problem('not-found')
  throw new Problem('invalid-input', { errors: result.error.issues.flatMap((issue) => faults(issue, [])) })
}

type Issue = z.core.$ZodIssue
type Path = readonly PropertyKey[]

function faults(issue: Issue, above: Path): { pointer: string; message: string }[] {
  const path = [...above, ...issue.path]
  if (issue.code === 'unrecognized_keys')
    return issue.keys.map((key) => ({ pointer: pointer([...path, key]), message: 'is not known here' }))
  if (issue.code === 'invalid_union' && issue.errors.length > 0) {
    // Only the alternative that was nearest: the faults of the others would send the reader the wrong way.
    const nearest = [...issue.errors].sort((a, b) => distance(a) - distance(b))[0] ?? []
    return nearest.flatMap((inner) => faults(inner, path))
  }
  return [{ pointer: pointer(path), message: issue.message }]
}

const distance = (issues: readonly Issue[]): number =>
  issues.reduce((sum, issue) => sum + (issue.code === 'unrecognized_keys' ? issue.keys.length : 1), 0)

const pointer = (path: Path): string =>
  path.map((step) => `/${String(step).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('')

const KINDS: Readonly<Record<string, string>> = {
  string: 'a text',
  number: 'a number',
  int: 'a whole number',
  boolean: 'true or false',
  array: 'a list',
  object: 'an object',
  null: 'null',
}
const FORMATS: Readonly<Record<string, string>> = {
  uuid: 'must be an id (UUID)',
  date: 'must be a day, YYYY-MM-DD',
  datetime: 'must be an instant, ISO 8601',
  email: 'must be an e-mail address',
}

/** Says what is wrong without the words of software; a message written in the contract goes before it. */
function inPlainWords(issue: z.core.$ZodRawIssue): string {
  if (issue.input === undefined && issue.code !== 'custom') return 'is missing'
  switch (issue.code) {
    case 'invalid_type':
      return `must be ${KINDS[issue.expected] ?? issue.expected}`
    case 'invalid_value':
      return `must be ${issue.values.map(String).join(' or ')}`
    case 'invalid_format':
      return FORMATS[issue.format] ?? 'is not written as it should be'
    case 'too_small':
      return `must be ${issue.inclusive ? 'at least' : 'more than'} ${size(issue.origin, issue.minimum)}`
    case 'too_big':
      return `must be ${issue.inclusive ? 'at most' : 'less than'} ${size(issue.origin, issue.maximum)}`
    case 'not_multiple_of':
      return `must be a multiple of ${issue.divisor}`
    default:
      return 'is not one of what is wanted here'
  }
}

function size(origin: string, limit: number | bigint): string {
  if (origin === 'string') return `${limit} characters long`
  if (origin === 'array' || origin === 'set') return `${limit} long`
  return String(limit)
}
