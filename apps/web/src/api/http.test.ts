import { beforeEach, describe, expect, test, vi } from 'vitest'
import { z } from 'zod'
import { createHttp, type EndedBecause } from './http'
import { ApiProblem, NotSent } from './problem'
import { newTap } from './tap'

const ME = '00000000-0000-4000-8000-000000000001'
const OTHER = '00000000-0000-4000-8000-000000000002'
const answer = z.object({ ok: z.boolean() })

const json = (status: number, body: unknown, headers: Record<string, string> = {}) =>
  new Response(JSON.stringify(body), { status, headers: { 'content-type': 'application/json', ...headers } })
const refused = (status: number, code: string, members: object = {}) =>
  json(status, { type: `urn:bellpull:problem:${code}`, title: code, status, instance: '/', ...members })
const session = (accessToken: string, id = ME) =>
  json(200, {
    accessToken,
    expiresInS: 900,
    user: { id, name: 'Wren Abernoth', initials: 'WA', role: 'circulator' },
  })

interface Seen {
  readonly path: string
  readonly headers: Headers
}

/** A house that answers by turns, and remembers what it was asked. */
function house(reply: (seen: Seen, nth: number) => Response | Promise<Response>) {
  const asked: Seen[] = []
  const ended: EndedBecause[] = []
  const http = createHttp((input, init) => {
    init?.signal?.throwIfAborted()
    const seen = { path: String(input), headers: new Headers(init?.headers) }
    asked.push(seen)
    return Promise.resolve().then(() => reply(seen, asked.filter(({ path }) => path === seen.path).length))
  })
  http.listen({ ended: (because) => ended.push(because), serverTime: () => undefined })
  http.keep({
    accessToken: 'old',
    expiresInS: 900,
    user: { id: ME, name: 'Wren', initials: 'W', role: 'circulator' },
  })
  const paths = () => asked.map(({ path }) => path.replace('/api/v1', ''))
  return { http, asked, ended, paths }
}

const isOld = ({ headers }: Seen) => headers.get('authorization') === 'Bearer old'

beforeEach(() => {
  vi.useRealTimers()
})

describe('a token that has run out', () => {
  test('is renewed once, and the request is sent again with the new one', async () => {
    const { http, asked, paths } = house((seen) => {
      if (seen.path.endsWith('/refresh')) return session('new')
      return isOld(seen) ? refused(401, 'not-signed-in') : json(200, { ok: true })
    })
    expect(await http.get('/board', answer)).toEqual({ ok: true })
    expect(paths()).toEqual(['/board', '/session/refresh', '/board'])
    expect(asked[2]?.headers.get('authorization')).toBe('Bearer new')
  })

  test('is renewed once for all who ask at the same time', async () => {
    const { http, paths } = house((seen) => {
      if (seen.path.endsWith('/refresh')) return session('new')
      return isOld(seen) ? refused(401, 'not-signed-in') : json(200, { ok: true })
    })
    await Promise.all(['/a', '/b', '/c'].map((path) => http.get(path, answer)))
    expect(paths().filter((path) => path === '/session/refresh')).toHaveLength(1)
    expect(paths()).toHaveLength(7)
  })

  test('that cannot be renewed ends the session, once, and says so', async () => {
    const { http, ended } = house(() => refused(401, 'not-signed-in'))
    await expect(http.get('/board', answer)).rejects.toMatchObject({ code: 'not-signed-in' })
    expect(ended).toEqual(['ended'])
  })

  test('does not end the session while the line is away', async () => {
    const { http, ended } = house((seen) => {
      if (seen.path.endsWith('/refresh')) throw new TypeError('network')
      return refused(401, 'not-signed-in')
    })
    await expect(http.get('/board', answer)).rejects.toBeInstanceOf(NotSent)
    expect(ended).toEqual([])
  })

  test('does not end the session while the house cannot reach its records', async () => {
    const { http, ended } = house((seen) =>
      seen.path.endsWith('/refresh') ? refused(503, 'unavailable') : refused(401, 'not-signed-in'),
    )
    await expect(http.get('/board', answer)).rejects.toMatchObject({ code: 'unavailable' })
    expect(ended).toEqual([])
  })

  test('renewed for another person is not used: what this one tapped is not done in that name', async () => {
    const { http, paths, ended } = house((seen) => {
      if (seen.path.endsWith('/refresh')) return session('theirs', OTHER)
      return isOld(seen) ? refused(401, 'not-signed-in') : json(200, { ok: true })
    })
    const tapped = http.post('/items/1/commands', answer, { body: { name: 'accept' }, tap: newTap() })
    await expect(tapped).rejects.toMatchObject({ code: 'not-signed-in' })
    expect(paths()).toEqual(['/items/1/commands', '/session/refresh'])
    expect(ended).toEqual(['other-person'])
  })

  test('renewed after signing out stays signed out', async () => {
    let answerRefresh: (response: Response) => void = () => undefined
    const { http, paths } = house((seen) => {
      if (seen.path.endsWith('/refresh')) return new Promise((resolve) => (answerRefresh = resolve))
      return refused(401, 'not-signed-in')
    })
    const asking = http.get('/board', answer)
    const outcome = expect(asking).rejects.toBeInstanceOf(ApiProblem)
    await vi.waitFor(() => expect(answerRefresh.length).toBe(1))
    http.drop()
    answerRefresh(session('new'))
    await outcome
    // Nothing is asked with the token that came too late.
    expect(paths()).toEqual(['/board', '/session/refresh'])
  })
})

describe('a tap', () => {
  test('carries one key, through renewal and while the first is still running', async () => {
    vi.useFakeTimers()
    const { http, asked } = house((seen, nth) => {
      if (seen.path.endsWith('/refresh')) return session('new')
      if (isOld(seen)) return refused(401, 'not-signed-in')
      return nth < 4 ? refused(409, 'in-progress') : json(200, { ok: true })
    })
    const tap = newTap()
    const tapped = http.post('/items/1/commands', answer, { body: { name: 'accept' }, tap })
    await vi.runAllTimersAsync()
    expect(await tapped).toEqual({ ok: true })
    const keys = asked
      .filter(({ path }) => path.endsWith('/commands'))
      .map(({ headers }) => headers.get('idempotency-key'))
    expect(keys).toEqual([tap.key, tap.key, tap.key, tap.key])
    expect(tap.key).toMatch(/^[0-9a-f]{8}-[0-9a-f]{4}-4[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/)
  })

  test('that finds no line is not sent, and is not sent again by itself', async () => {
    const { http, paths } = house(() => {
      throw new TypeError('network')
    })
    const tapped = http.post('/items/1/commands', answer, { body: {}, tap: newTap() })
    await expect(tapped).rejects.toMatchObject({ name: 'NotSent', reason: 'offline' })
    expect(paths()).toHaveLength(1)
  })

  test('without an answer in time is not sent, and says which of the two it was', async () => {
    const http = createHttp(
      (_input, init) =>
        new Promise((_resolve, reject) => {
          init?.signal?.addEventListener('abort', () => reject(init.signal?.reason as Error))
        }),
    )
    await expect(http.post('/x', answer, { body: {}, deadlineMs: 20 })).rejects.toMatchObject({
      name: 'NotSent',
      reason: 'deadline',
    })
  })

  test('works where the browser has no randomUUID: plain http inside the house', () => {
    const spy = vi.spyOn(crypto, 'randomUUID')
    Object.defineProperty(crypto, 'randomUUID', { value: undefined, configurable: true })
    try {
      expect(newTap().key).toMatch(/^[0-9a-f]{8}-[0-9a-f]{4}-4[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/)
    } finally {
      spy.mockRestore()
      Reflect.deleteProperty(crypto, 'randomUUID')
    }
  })
})

describe('a refusal', () => {
  test('is known by its code, with what belongs to it', async () => {
    const { http } = house(() =>
      refused(409, 'wrong-item', { expected: { size: '50' }, scanned: { size: '48' } }),
    )
    const problem = await http.get('/x', answer).catch((error: unknown) => error as ApiProblem)
    expect(problem).toBeInstanceOf(ApiProblem)
    expect(problem).toMatchObject({ code: 'wrong-item', status: 409, members: { scanned: { size: '48' } } })
  })

  test.each([
    { what: 'a code of a newer house', response: () => refused(409, 'brand-new'), code: 'unexpected' },
    { what: "a proxy's page", response: () => new Response('<html>', { status: 502 }), code: 'unavailable' },
    {
      what: 'an answer that is not what was promised',
      response: () => json(200, { ok: 'perhaps' }),
      code: 'unexpected',
    },
    { what: 'an answer that is no JSON', response: () => new Response('<html>'), code: 'unexpected' },
  ])('$what is told as $code', async ({ response, code }) => {
    await expect(house(response).http.get('/x', answer)).rejects.toMatchObject({ code })
  })

  test('of signing in ends no session and renews none', async () => {
    const { http, paths, ended } = house(() => refused(401, 'wrong-credentials'))
    await expect(http.post('/session', answer, { body: {}, anonymous: true })).rejects.toMatchObject({
      code: 'wrong-credentials',
    })
    expect(paths()).toEqual(['/session'])
    expect(ended).toEqual([])
  })
})

test('answers may gain fields', async () => {
  const { http } = house(() => json(200, { ok: true, added: 1 }))
  expect(await http.get('/x', answer)).toEqual({ ok: true })
})

test('the socket gets a token that lasts: one that was refused or is about to end is renewed first', async () => {
  const { http, paths } = house(() => session('new'))
  expect(await http.freshToken()).toBe('old')
  http.tokenRefused()
  expect(await http.freshToken()).toBe('new')
  expect(paths()).toEqual(['/session/refresh'])
})
