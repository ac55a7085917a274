import request from 'supertest'
import { afterAll, beforeAll, beforeEach, expect, it } from 'vitest'
import { startTestApi, TEST_PASSWORD, type TestApi } from '../../test/app.js'
import { createLog } from './log.js'

const lines: string[] = []
let api: TestApi
beforeAll(async () => {
  const log = createLog('info', { write: (line) => void lines.push(line) })
  api = await startTestApi({ log })
})
afterAll(() => api.close())
beforeEach(() => {
  lines.length = 0
})
const line = () => JSON.parse(lines[0]!) as Record<string, unknown>

it('a refusal is one line, by the name of the request, without what was sent', async () => {
  await api.signInAs('scrub', 'Quiet Person')
  lines.length = 0
  const reply = await request(api.url)
    .post('/api/v1/session?from=here')
    .send({ email: 'quiet.person@tests.example', password: 'a-very-secret-thing' })
    .expect(401)
  expect(lines).toHaveLength(1)
  expect(line()).toEqual({
    level: 'info',
    time: expect.any(String),
    event: 'http.refused',
    traceId: reply.get('X-Trace-Id'),
    problem: 'wrong-credentials',
    status: 401,
    method: 'POST',
    path: '/api/v1/session',
    msg: 'wrong-credentials',
  })
})

it.each([
  ['broken JSON', '{"password":"a-very-secret-thing"'],
  ['a body that fits no contract', '{"password":"a-very-secret-thing"}'],
  ['a body that PostgreSQL cannot take', `{"email":"a\\u0000b","password":"${TEST_PASSWORD}"}`],
])('%s leaves nothing of itself in the log', async (_what, body) => {
  const reply = await request(api.url)
    .post('/api/v1/session')
    .set('Content-Type', 'application/json')
    .send(body)
  expect(reply.status).toBeGreaterThanOrEqual(400)
  expect(reply.status).toBeLessThan(500)
  expect(lines).toHaveLength(1)
  expect(lines[0]).not.toMatch(/secret|tests\.example/)
})

it('a failure says where it went wrong, without rows and parameters', async () => {
  const person = await api.signInAs('runner', 'Unlucky Person')
  await api.rows('ALTER TABLE room RENAME COLUMN revision TO gone')
  lines.length = 0
  const reply = await api.as(person).get('/rooms').expect(500)
  expect(lines).toHaveLength(1)
  expect(line()).toMatchObject({
    level: 'error',
    event: 'http.failed',
    traceId: (reply.body as { traceId: string }).traceId,
    err: { type: 'QueryFailedError', code: '42703' },
  })
  expect(lines[0]).not.toContain('Unlucky')
})
