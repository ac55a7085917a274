import { sessionView, type SessionView } from '@bellpull/contracts'
import type { z } from 'zod'
import { ApiProblem, NotSent, problemOf } from './problem'
import type { Tap } from './tap'

const ROOT = '/api/v1'

/** How long an answer may take, in milliseconds, before it counts as not sent. */
const DEADLINE_MS = 10_000
/** An access token that ends sooner than this, in milliseconds, is renewed before a socket uses it. */
const FRESH_FOR_MS = 15_000
/** The first request with the same key is still running: how often and how long to wait, in milliseconds. */
const IN_PROGRESS_WAITS_MS = [250, 500, 1_000]

export interface RequestOptions<S extends z.ZodType> {
  /** The shape of the answer; without it the answer is not read. */
  readonly schema?: S
  readonly query?: Readonly<Record<string, string | number | undefined>>
  readonly body?: unknown
  readonly tap?: Tap
  readonly deadlineMs?: number
  readonly signal?: AbortSignal
  /** Sent without a token, and never renewed: signing in. */
  readonly anonymous?: boolean
}

export type EndedBecause = 'ended' | 'other-person'

export interface HttpEvents {
  /** The session is over: the house says so, or another person has signed in in this browser. */
  ended(because: EndedBecause): void
  /** The house's `Date` of an answer, and when it was asked for and came, all in milliseconds. */
  serverTime(serverMs: number, sentMs: number, receivedMs: number): void
}

export type Http = ReturnType<typeof createHttp>

/**
 * The only place that talks HTTP: token and its renewal, keys of taps, deadlines, problems.
 *
 * @throws {ApiProblem} (every request) the house refused.
 * @throws {NotSent} (every request) no answer came; nothing is sent again by itself.
 */
export function createHttp(fetcher: typeof fetch = (...request) => fetch(...request)) {
  let session: { token: string; userId: string; endsAtMs: number } | null = null
  let epoch = 0
  let renewing: Promise<void> | null = null
  let events: HttpEvents = { ended: () => undefined, serverTime: () => undefined }

  function keep(view: SessionView): void {
    const endsAtMs = performance.now() + view.expiresInS * 1000
    session = { token: view.accessToken, userId: view.user.id, endsAtMs }
  }

  function drop(): void {
    epoch += 1
    session = null
  }

  async function once(
    method: string,
    path: string,
    options: RequestOptions<z.ZodType>,
    token: string | null,
  ): Promise<Response> {
    const headers = new Headers({ accept: 'application/json' })
    if (token !== null) headers.set('authorization', `Bearer ${token}`)
    if (options.body !== undefined) headers.set('content-type', 'application/json')
    if (options.tap) headers.set('idempotency-key', options.tap.key)
    const timeout = AbortSignal.timeout(options.deadlineMs ?? DEADLINE_MS)
    const signal = options.signal ? AbortSignal.any([timeout, options.signal]) : timeout
    const sentMs = Date.now()
    try {
      const response = await fetcher(ROOT + path + queryOf(options.query), {
        method,
        headers,
        signal,
        credentials: 'same-origin',
        cache: 'no-store',
        ...(options.body !== undefined && { body: JSON.stringify(options.body) }),
      })
      const date = Date.parse(response.headers.get('date') ?? '')
      if (!Number.isNaN(date)) events.serverTime(date, sentMs, Date.now())
      return response
    } catch (error) {
      if (options.signal?.aborted) throw error
      throw new NotSent(timeout.aborted ? 'deadline' : 'offline', { cause: error })
    }
  }

  /** The answer of one request: with the token, renewed once where it ran out. */
  async function answered(
    method: string,
    path: string,
    options: RequestOptions<z.ZodType>,
  ): Promise<Response> {
    if (options.anonymous) return await once(method, path, options, null)
    const used = session?.token ?? null
    const response = await once(method, path, options, used)
    if (response.status !== 401) return response
    // Somebody else may have renewed it while this request was on its way.
    if (used === null || session?.token === used) await renew()
    return await once(method, path, options, session?.token ?? null)
  }

  async function request<S extends z.ZodType>(
    method: string,
    path: string,
    options: RequestOptions<S> = {},
  ): Promise<z.output<S>> {
    for (const waitMs of [...IN_PROGRESS_WAITS_MS, null]) {
      const response = await answered(method, path, options)
      if (response.ok) return await read(response, options.schema)
      const problem = await problemOf(response)
      if (problem.code === 'not-signed-in' && !options.anonymous && session !== null) {
        drop()
        events.ended('ended')
      }
      if (problem.code !== 'in-progress' || waitMs === null) throw problem
      await new Promise((resolve) => setTimeout(resolve, waitMs))
    }
    throw new ApiProblem('in-progress', 409)
  }

  /** Renews the session, once for all who ask at the same time, and one tab after the other. */
  function renew(): Promise<void> {
    renewing ??= inTurn(renewNow).finally(() => {
      renewing = null
    })
    return renewing
  }

  async function renewNow(): Promise<void> {
    const mine = epoch
    const response = await once('POST', '/session/refresh', {}, null)
    if (mine !== epoch) throw new ApiProblem('not-signed-in', 401)
    if (!response.ok) {
      const problem = await problemOf(response)
      if (problem.status === 401) end('ended')
      throw problem
    }
    const view = await read(response, sessionView)
    // Another tab signed somebody else in: what this person tapped must not be done in their name.
    if (session !== null && session.userId !== view.user.id) {
      end('other-person')
      throw new ApiProblem('not-signed-in', 401)
    }
    renewed = view
    keep(view)
  }
  let renewed: SessionView | null = null

  function end(because: EndedBecause): void {
    const wasSignedIn = session !== null
    drop()
    if (wasSignedIn) events.ended(because)
  }

  return {
    get: <S extends z.ZodType>(
      path: string,
      schema: S,
      options: Omit<RequestOptions<S>, 'schema' | 'body'> = {},
    ) => request('GET', path, { ...options, schema }),
    post: <S extends z.ZodType>(path: string, schema: S, options: Omit<RequestOptions<S>, 'schema'> = {}) =>
      request('POST', path, { ...options, schema }),
    /** For answers without a body. */
    send: (
      method: 'POST' | 'DELETE',
      path: string,
      options: Omit<RequestOptions<z.ZodType>, 'schema'> = {},
    ) => request(method, path, options).then(() => undefined),

    /** Takes the session that signing in has given. */
    keep,
    /** Forgets the token; the house is told by `DELETE /session`. */
    drop,
    /** Opens the session that the cookie still carries. @throws {ApiProblem} `not-signed-in` where there is none. */
    async restore(): Promise<SessionView> {
      await renew()
      if (renewed === null) throw new ApiProblem('not-signed-in', 401)
      return renewed
    },
    /** A token that will not run out in the next seconds, for the socket. */
    async freshToken(): Promise<string> {
      if (session === null || session.endsAtMs - performance.now() < FRESH_FOR_MS) await renew()
      if (session === null) throw new ApiProblem('not-signed-in', 401)
      return session.token
    },
    /** The token that was given out has been refused: the next one is a new one. */
    tokenRefused(): void {
      if (session !== null) session.endsAtMs = 0
    },
    listen(listener: HttpEvents): void {
      events = listener
    },
  }
}

/** Tabs share one cookie: where the browser can, they renew it one after the other. */
async function inTurn(work: () => Promise<void>): Promise<void> {
  // Not there on plain http.
  const locks = navigator.locks as LockManager | null | undefined
  if (!locks) return await work()
  await locks.request('bellpull-session', work)
}

function queryOf(query: RequestOptions<z.ZodType>['query']): string {
  const given = Object.entries(query ?? {}).flatMap(([name, value]) =>
    value === undefined ? [] : [[name, String(value)] as [string, string]],
  )
  return given.length === 0 ? '' : `?${new URLSearchParams(given).toString()}`
}

/** @throws {ApiProblem} `unexpected` when the answer is not what the contract says. */
async function read<S extends z.ZodType>(response: Response, schema: S | undefined): Promise<z.output<S>> {
  if (schema === undefined) return undefined as z.output<S>
  let body: unknown
  try {
    body = await response.json()
  } catch (error) {
    if (error instanceof SyntaxError) throw new ApiProblem('unexpected', response.status)
    // The line broke in the middle of the answer.
    throw new NotSent('offline', { cause: error })
  }
  const parsed = schema.safeParse(body)
  if (parsed.success) return parsed.data
  throw new ApiProblem('unexpected', response.status, { detail: parsed.error.message })
}

export const http = createHttp()
