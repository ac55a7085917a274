import { ROLES, type Role } from '@bellpull/domain'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { everyRole, startTestApi, type SignedIn, type TestApi } from '../test/app.js'
import { ROUTES, type Route } from '../test/routes.js'
import { DOCUMENTED_ROUTES } from './modules/docs/index.js'

let api: TestApi
let who: Record<Role, SignedIn>
beforeAll(async () => {
  api = await startTestApi()
  who = await everyRole(api)
})
afterAll(() => api.close())

const urlOf = (path: string): string => (path.startsWith('/fhir') ? path : `/api/v1${path}`)
const type = (code: string) => `urn:bellpull:problem:${code}`
const title = (route: Route): string =>
  `${route.method.toUpperCase()} ${route.path.replace(/[0-9a-f-]{36}/g, ':id')} ${JSON.stringify((route.body as { name?: string })?.name ?? '')}`

function send(route: Route, person: SignedIn | null): request.Test {
  const test = request(api.url)[route.method](urlOf(route.path))
  if (person) void test.set('Authorization', `Bearer ${person.token}`)
  if (route.method !== 'get') void test.set('Idempotency-Key', crypto.randomUUID()).send(route.body ?? {})
  return test
}

describe('every route', () => {
  it.each(ROUTES.map((route) => [title(route), route] as const))(
    '%s refuses whom it should',
    async (_title, route) => {
      const anonymous = await send(route, null)
      expect([anonymous.status, (anonymous.body as { type: string }).type]).toEqual([
        401,
        type('not-signed-in'),
      ])
      const got: Record<string, number> = {}
      const wanted: Record<string, number> = {}
      for (const role of ROLES) {
        got[role] = (await send(route, who[role])).status
        wanted[role] = route.roles.includes(role) ? route.then : 403
      }
      expect(got).toEqual(wanted)
    },
  )

  it('left no trace of all that was refused', async () => {
    for (const table of ['call', 'item', 'event', 'movement', 'surgical_case'])
      expect(await api.rows(`SELECT 1 FROM ${table}`), table).toEqual([])
    const paths = await api.rows(
      'SELECT DISTINCT path FROM idempotency_key WHERE status >= 400 OR status = 0',
    )
    expect(paths).toEqual([])
    expect(api.published.all).toEqual([])
  })

  it('of the document is mounted, and the walk above knows it', async () => {
    const walked = ROUTES.map(
      (route) => `${route.method} ${route.path.replace(/\?.*/, '').replace(/[0-9a-f-]{36}/, '{id}')}`,
    )
    const missing = DOCUMENTED_ROUTES.filter(
      (route) =>
        !route.anonymous && route.path !== '/session' && !walked.includes(`${route.method} ${route.path}`),
    )
    expect(missing).toEqual([])
    for (const route of DOCUMENTED_ROUTES.filter((documented) => documented.anonymous)) {
      const reply = await request(api.url)[route.method](`/api/v1${route.path}`)
      expect(reply.status, route.path).not.toBe(404)
    }
  })
})

describe('refusals', () => {
  it.each([
    ['an unknown route', '/api/v1/nothing'],
    ['a path outside the versions', '/api/nothing'],
    ['a path whose percent signs mean nothing', '/api/v1/cases/%E0%A4%A'],
    ['the root, where no web application is served', '/'],
  ])('%s is not found', async (_what, path) => {
    const reply = await request(api.url)
      .get(path)
      .set('Authorization', `Bearer ${who.admin.token}`)
      .expect(404)
    expect(reply.type).toBe('application/problem+json')
    expect(reply.body).toEqual({
      type: type('not-found'),
      title: 'There is nothing here by that name',
      status: 404,
      instance: path,
    })
  })

  it('an unknown route tells nothing to somebody who is not signed in', async () => {
    await request(api.url).get('/api/v1/nothing').expect(401)
  })

  it.each([
    ['broken', '{', 400, 'malformed-body'],
    ['large', `{"scan":"${'1'.repeat(1 << 20)}"}`, 413, 'body-too-large'],
    ['no object or list', '"text"', 400, 'malformed-body'],
  ])('a body that is %s is refused, but only to somebody signed in', async (_what, body, status, code) => {
    const post = (token: string) =>
      request(api.url)
        .post('/api/v1/stock/receipts')
        .set('Authorization', `Bearer ${token}`)
        .set('Content-Type', 'application/json')
        .send(body)
    expect((await post(who.surgeon.token).expect(status)).body).toMatchObject({ type: type(code) })
    await post('nobody').expect(401)
  })

  it('says nothing internal when something fails, and names the line of the log', async () => {
    const failing = await startTestApi()
    const admin = await failing.signInAs('admin')
    await failing.rows('DROP TABLE case_member CASCADE')
    const reply = await failing.as(admin).get('/me').expect(500)
    expect(reply.body).toEqual({
      type: type('unexpected'),
      title: 'Something went wrong',
      status: 500,
      instance: '/api/v1/me',
      traceId: reply.get('X-Trace-Id'),
    })
    await failing.close()
  })
})

describe('for machines', () => {
  it('is alive and ready', async () => {
    await request(api.url).get('/api/v1/health/live').expect(200, { status: 'live' })
    await request(api.url).get('/api/v1/health/ready').expect(200, { status: 'ready' })
  })

  it('gives its metrics on this machine, and through a proxy to an administrator alone', async () => {
    const here = await request(api.url).get('/metrics').expect(200)
    expect(here.text).toContain('bellpull_http_request_duration_seconds_bucket')
    expect(here.text).toContain('route="/api/v1/cases/:id/commands"')
    const there = () => request(api.url).get('/metrics').set('X-Forwarded-For', '192.0.2.7')
    await there().expect(401)
    await there().set('Authorization', `Bearer ${who.charge.token}`).expect(403)
    await there().set('Authorization', `Bearer ${who.admin.token}`).expect(200)
  })

  it('describes itself, in a document and on a page that loads nothing from elsewhere', async () => {
    const reply = await request(api.url).get('/api/v1/openapi.json').expect(200)
    const document = reply.body as {
      openapi: string
      paths: Record<string, unknown>
      components: { schemas: object }
    }
    expect(document.openapi).toBe('3.1.0')
    expect(Object.keys(document.paths)).toContain('/api/v1/cases/{id}/calls')
    expect(Object.keys(document.components.schemas)).toEqual(
      expect.arrayContaining(['Call', 'Item', 'Case', 'Problem']),
    )
    const page = await request(api.url).get('/api/docs').expect(200)
    expect(page.type).toBe('text/html')
    expect(page.text).not.toMatch(/<script|https?:\/\//)
    for (const path of Object.keys(document.paths)) expect(page.text).toContain(path)
  })

  it('lets a page load only from here', async () => {
    const policy = (await request(api.url).get('/api/docs')).get('Content-Security-Policy')
    expect(policy).toContain(`default-src 'self';script-src 'self';style-src 'self' 'unsafe-inline'`)
    expect(policy).not.toContain('upgrade-insecure-requests')
  })
})
