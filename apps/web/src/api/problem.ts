import { problemCode, problemDetails, type ProblemCode } from '@bellpull/contracts'

/** A refusal by the house: RFC 9457, with its stable code. */
export class ApiProblem extends Error {
  override readonly name = 'ApiProblem'

  constructor(
    readonly code: ProblemCode,
    readonly status: number,
    /** Members beyond type, title and status: `detail`, `errors`, `expected`, `scanned`, `reason`, ... */
    readonly members: Readonly<Record<string, unknown>> = {},
  ) {
    super(code)
  }

  get detail(): string | null {
    return typeof this.members['detail'] === 'string' ? this.members['detail'] : null
  }

  get errors(): readonly { pointer: string; message: string }[] {
    return (this.members['errors'] as { pointer: string; message: string }[] | undefined) ?? []
  }
}

/**
 * No answer came: the line is away, or the deadline passed. Whether the house heard it is not known, so the
 * same tap must go with the same key when a person sends it again; nothing sends it by itself.
 */
export class NotSent extends Error {
  override readonly name = 'NotSent'

  constructor(
    readonly reason: 'offline' | 'deadline',
    options?: ErrorOptions,
  ) {
    super(`not sent: ${reason}`, options)
  }
}

/** Reads a refusal; what is none of ours (a proxy's page) counts as `unavailable` or `unexpected`. */
export async function problemOf(response: Response): Promise<ApiProblem> {
  const body: unknown = await response.json().catch(() => null)
  const parsed = problemDetails.safeParse(body)
  if (!parsed.success)
    return new ApiProblem(response.status >= 502 ? 'unavailable' : 'unexpected', response.status)
  const { type, status, title: _title, instance: _instance, ...members } = parsed.data
  return new ApiProblem(problemCode(type) ?? 'unexpected', status, members)
}
