import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { startTestApi, type TestApi } from '../../../test/app.js'
import { sweep } from './housekeeping.js'

let api: TestApi
beforeAll(async () => {
  api = await startTestApi()
})
afterAll(() => api.close())

const DAY_MS = 24 * 3_600_000
const counts = async () =>
  (
    await api.rows(`SELECT (SELECT count(*)::int FROM idempotency_key) AS keys,
                           (SELECT count(*)::int FROM sign_in_failure) AS failures,
                           (SELECT count(*)::int FROM refresh_token) AS tokens,
                           (SELECT count(*)::int FROM session) AS sessions`)
  )[0]

it('throws away what has had its time, and nothing before', async () => {
  const person = await api.signInAs('runner')
  const body = { scan: '(01)09506000134352(17)301231(10)L1' }
  await api.as(person).post('/labels/parse', body, randomUUID()).expect(200)
  await api.house.pins.check(person.id, '0000')
  const all = { keys: 1, failures: 1, tokens: 1, sessions: 1 }

  await sweep(api.house.database, new Date(api.clock.now().getTime() + DAY_MS - 1))
  expect(await counts()).toEqual(all)
  await sweep(api.house.database, new Date(api.clock.now().getTime() + DAY_MS))
  expect(await counts()).toEqual({ ...all, keys: 0 })
  expect(await sweep(api.house.database, new Date(api.clock.now().getTime() + 32 * DAY_MS))).toEqual({
    idempotency_key: 0,
    sign_in_failure: 1,
    refresh_token: 1,
    session: 1,
  })
})
