import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startTestApi, type SignedIn, type TestApi } from '../../../test/app.js'
import { KEY_LIVES_MS, storedAnswer, storeAnswer, type KeyUse } from './idempotency.js'

let api: TestApi
let person: SignedIn
let other: SignedIn
beforeAll(async () => {
  api = await startTestApi()
  person = await api.signInAs('runner')
  other = await api.signInAs('core')
})
afterAll(() => api.close())

const PATH = '/labels/parse'
const LABEL = '(01)09506000134352(17)301231(10)L1'
const type = (code: string) => `urn:bellpull:problem:${code}`
const rowsOf = (key: string) =>
  api.rows('SELECT status, answer, path FROM idempotency_key WHERE key = $1', [key])

describe('a key that is welcome', () => {
  it('keeps the answer: same words, also when the members come in another order', async () => {
    const key = randomUUID()
    const first = await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
    expect(await rowsOf(key)).toEqual([{ status: 200, answer: first.text, path: '/api/v1/labels/parse' }])
    await api.rows(`UPDATE idempotency_key SET answer = '{"stored":true}' WHERE key = $1`, [key])
    const again = await api.as(person).post(PATH, { scan: LABEL }, key.toUpperCase()).expect(200)
    expect(again.body).toEqual({ stored: true })
    expect(again.type).toBe('application/json')
  })

  it('is not needed', async () => {
    await api.as(person).post(PATH, { scan: LABEL }, null).expect(200)
  })

  it('that is no UUID is refused', async () => {
    const reply = await api.as(person).post(PATH, { scan: LABEL }, 'tap-1').expect(422)
    expect(reply.body).toMatchObject({ type: type('invalid-input') })
  })

  it('of another body is refused before the body is looked at', async () => {
    const key = randomUUID()
    await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
    const reply = await api.as(person).post(PATH, { nonsense: true }, key).expect(422)
    expect(reply.body).toMatchObject({ type: type('idempotency-key-reused') })
  })

  it('belongs to one person', async () => {
    const key = randomUUID()
    await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
    await api
      .as(other)
      .post(PATH, { scan: `${LABEL}(21)7` }, key)
      .expect(200)
  })

  it('is free again after a refusal, which leaves nothing', async () => {
    const key = randomUUID()
    await api.as(person).post(PATH, { scan: 'nonsense' }, key).expect(422)
    expect(await rowsOf(key)).toEqual([])
    await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
  })

  it('stands for its first request a day long', async () => {
    const key = randomUUID()
    await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
    await api.rows('UPDATE idempotency_key SET created_at = $2 WHERE key = $1', [
      key,
      new Date(api.clock.now().getTime() - KEY_LIVES_MS + 1),
    ])
    await api
      .as(person)
      .post(PATH, { scan: `${LABEL}(21)7` }, key)
      .expect(422)
    await api.rows('UPDATE idempotency_key SET created_at = $2 WHERE key = $1', [
      key,
      new Date(api.clock.now().getTime() - KEY_LIVES_MS),
    ])
    await api
      .as(person)
      .post(PATH, { scan: `${LABEL}(21)7` }, key)
      .expect(200)
  })

  it('whose first request is still running waits, until that one must have died', async () => {
    const key = randomUUID()
    await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
    await api.rows(`UPDATE idempotency_key SET status = 0, answer = '' WHERE key = $1`, [key])
    const reply = await api.as(person).post(PATH, { scan: LABEL }, key).expect(409)
    expect(reply.body).toMatchObject({ type: type('in-progress') })
    await api.rows(
      `UPDATE idempotency_key SET created_at = created_at - interval '1 minute' WHERE key = $1`,
      [key],
    )
    await api.as(person).post(PATH, { scan: LABEL }, key).expect(200)
  })
})

describe('a key inside a transaction', () => {
  const use = (): KeyUse => ({
    personId: person.id,
    method: 'POST',
    path: '/api/v1/x',
    key: randomUUID(),
    requestHash: Buffer.from('a'),
  })

  it('is refused to everybody else until the first is through, and answered after', async () => {
    const mine = use()
    const now = api.clock.now()
    let letGo = (): void => undefined
    const held = new Promise<void>((resolve) => {
      letGo = resolve
    })
    const begun = vi.fn()
    const first = api.house.database.transaction(async (sql) => {
      expect(await storedAnswer(sql, mine, now)).toBeNull()
      begun()
      await held
      await storeAnswer(sql, mine, { status: 201, answer: '{}' }, now)
    })
    await vi.waitFor(() => expect(begun).toHaveBeenCalled(), { timeout: 5_000 })
    const again = () => api.house.database.transaction((sql) => storedAnswer(sql, mine, now))
    await expect(again()).rejects.toMatchObject({ code: 'in-progress' })
    letGo()
    await first
    expect(await again()).toEqual({ status: 201, answer: '{}' })
  })

  it('leaves nothing when the work fails', async () => {
    const mine = use()
    const failing = api.house.database.transaction(async (sql) => {
      await storeAnswer(sql, mine, { status: 201, answer: '{}' }, api.clock.now())
      throw new Error('changed my mind')
    })
    await expect(failing).rejects.toThrow()
    expect(await rowsOf(mine.key)).toEqual([])
  })
})
