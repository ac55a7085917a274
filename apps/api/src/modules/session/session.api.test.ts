import { createHash } from 'node:crypto'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startTestApi, TEST_PASSWORD, TEST_PIN, type SignedIn, type TestApi } from '../../../test/app.js'
import { REMEMBERED_MS } from './attempts.js'
import { BELIEVED_MS } from './live-sessions.js'
import { GRACE_MS, IDLE_MS, LONGEST_MS } from './session.service.js'

let api: TestApi
beforeAll(async () => {
  api = await startTestApi()
})
afterAll(() => api.close())

const post = (path: string, body: object = {}) => request(api.url).post(`/api/v1/session${path}`).send(body)
const emailOf = (name: string) => `${name.toLowerCase().replaceAll(' ', '.')}@tests.example`
const cookieOf = (reply: request.Response): string => String(reply.get('Set-Cookie')?.[0]).split(';')[0]!

/** A browser that has just signed in: its refresh cookie and its token. */
async function browser(name: string): Promise<{ cookie: string; token: string; person: SignedIn }> {
  const person = await api.signInAs('circulator', name)
  const reply = await post('', { email: emailOf(name), password: TEST_PASSWORD }).expect(200)
  return { cookie: cookieOf(reply), token: (reply.body as { accessToken: string }).accessToken, person }
}
const refresh = (cookie: string) => post('/refresh').set('Cookie', cookie)
const me = (token: string) => request(api.url).get('/api/v1/me').set('Authorization', `Bearer ${token}`)
const type = (code: string) => `urn:bellpull:problem:${code}`

describe('signing in', () => {
  it('answers with token, person and a cookie that scripts cannot read', async () => {
    const person = await api.signInAs('scrub', 'Ada Quill')
    const reply = await post('', { email: ' ADA.quill@tests.example ', password: TEST_PASSWORD }).expect(200)
    expect(reply.body).toEqual({
      accessToken: expect.any(String),
      expiresInS: 900,
      user: { id: person.id, name: 'Ada Quill', initials: 'AQ', role: 'scrub' },
    })
    const cookie = String(reply.get('Set-Cookie'))
    expect(cookie).toMatch(
      /^bellpull_refresh=[\w-]{43}; Path=\/api\/v1\/session; Expires=.*; HttpOnly; SameSite=Strict$/,
    )
    expect(reply.get('Cache-Control')).toBe('no-store')
  })

  it('marks the cookie for https alone where the request came by https', async () => {
    await api.signInAs('scrub', 'Ada Quill')
    const credentials = { email: emailOf('Ada Quill'), password: TEST_PASSWORD }
    const reply = await post('', credentials).set('X-Forwarded-Proto', 'https').expect(200)
    expect(String(reply.get('Set-Cookie'))).toContain('; Secure;')
  })

  it('stores only the hash of the refresh token', async () => {
    const { cookie } = await browser('Hash Keeper')
    const token = cookie.split('=')[1]!
    const hash = createHash('sha256').update(token).digest()
    expect(await api.rows('SELECT 1 FROM refresh_token WHERE token_hash = $1', [hash])).toHaveLength(1)
    const [found] = await api.rows<{ all: string }>(
      `SELECT string_agg(t::text, ' ') AS all FROM refresh_token t`,
    )
    expect(found!.all).not.toContain(token)
  })

  it.each([
    ['an unknown address', 'nobody@tests.example', TEST_PASSWORD],
    ['a wrong password', 'ada.quill@tests.example', 'not-the-right-words'],
    ['somebody who is disabled', 'gone.away@tests.example', TEST_PASSWORD],
    ['somebody without a password', 'no.password@tests.example', TEST_PASSWORD],
  ])('refuses %s in the same words', async (_what, email, password) => {
    await api.signInAs('scrub', 'Ada Quill')
    await api.signInAs('scrub', 'Gone Away')
    await api.rows(`UPDATE person SET active = false WHERE email = 'gone.away@tests.example'`)
    await api.rows(
      `INSERT INTO person (id, email, name, initials, role)
       VALUES (gen_random_uuid(), 'no.password@tests.example', 'No Password', 'NP', 'runner') ON CONFLICT DO NOTHING`,
    )
    const reply = await post('', { email, password }).expect(401)
    expect(reply.body).toEqual({
      type: type('wrong-credentials'),
      title: 'E-mail or password is not right',
      status: 401,
      instance: '/api/v1/session',
    })
    expect(reply.get('Set-Cookie')).toBeUndefined()
    await api.rows(`UPDATE person SET active = true WHERE email = 'gone.away@tests.example'`)
  })

  it.each([
    ['nothing', {}, ['/email', '/password']],
    ['an unknown member', { email: 'a@b.example', password: 'x', remember: true }, ['/remember']],
  ])('says what is wrong with %s', async (_what, body, pointers) => {
    const reply = await post('', body).expect(422)
    const { errors } = reply.body as { errors: { pointer: string }[] }
    expect(errors.map((error) => error.pointer)).toEqual(pointers)
  })

  it('refuses a body that is no JSON, and one that is too large', async () => {
    const send = (body: string) => post('').set('Content-Type', 'application/json').send(body)
    expect((await send('{').expect(400)).body).toMatchObject({ type: type('malformed-body') })
    const large = JSON.stringify({ email: 'x'.repeat(1 << 20), password: 'x' })
    expect((await send(large).expect(413)).body).toMatchObject({ type: type('body-too-large') })
  })
})

describe('too many failures', () => {
  const fail = (email: string) => post('', { email, password: 'not-the-right-words' })

  it('make an account wait, the right password too, while its live session goes on', async () => {
    const { token } = await browser('Many Tries')
    for (let n = 0; n < 8; n += 1) await fail(emailOf('Many Tries')).expect(401)
    const refused = await post('', { email: emailOf('Many Tries'), password: TEST_PASSWORD }).expect(429)
    expect(refused.body).toMatchObject({ type: type('too-many-attempts'), retryAfterS: REMEMBERED_MS / 1000 })
    expect(refused.get('Retry-After')).toBe(String(REMEMBERED_MS / 1000))
    await me(token).expect(200)

    api.clock.forward(REMEMBERED_MS)
    await post('', { email: emailOf('Many Tries'), password: TEST_PASSWORD }).expect(200)
  })

  it('count alike for an address that has no account', async () => {
    for (let n = 0; n < 8; n += 1) await fail('no.account@tests.example').expect(401)
    await fail('no.account@tests.example').expect(429)
  })

  it('cannot be outrun by many at once', async () => {
    const email = emailOf('All At Once')
    await api.signInAs('runner', 'All At Once')
    for (let n = 0; n < 7; n += 1) await fail(email).expect(401)
    const rival = api.dataSource.createQueryRunner()
    await rival.startTransaction()
    await rival.query('SELECT pg_advisory_xact_lock(hashtextextended($1, 8421))', [email])
    const replying = Promise.all(Array.from({ length: 4 }, () => fail(email)))
    const waiting = async () =>
      (
        await api.rows(
          `SELECT 1 FROM pg_stat_activity WHERE datname = current_database() AND wait_event = 'advisory'`,
        )
      ).length
    await expect.poll(waiting, { timeout: 5_000 }).toBe(4)
    await rival.commitTransaction()
    await rival.release()
    expect((await replying).map((reply) => reply.status).sort()).toEqual([401, 429, 429, 429])
  })

  it('are forgotten after a success, and successes never count', async () => {
    await api.signInAs('runner', 'Slow Typist')
    for (let round = 0; round < 3; round += 1) {
      for (let n = 0; n < 7; n += 1) await fail(emailOf('Slow Typist')).expect(401)
      await post('', { email: emailOf('Slow Typist'), password: TEST_PASSWORD }).expect(200)
    }
  })
})

describe('a session', () => {
  it('is renewed by its cookie, which is exchanged', async () => {
    const { cookie, person } = await browser('Renewed One')
    const reply = await refresh(cookie).expect(200)
    expect(reply.body).toMatchObject({ expiresInS: 900, user: { id: person.id } })
    expect(cookieOf(reply)).not.toBe(cookie)
    await me((reply.body as { accessToken: string }).accessToken).expect(200)
  })

  it('bears the same cookie twice within the grace: two tabs', async () => {
    const { cookie } = await browser('Two Tabs')
    const first = await refresh(cookie).expect(200)
    api.clock.forward(GRACE_MS)
    const second = await refresh(cookie).expect(200)
    await refresh(cookieOf(first)).expect(200)
    await refresh(cookieOf(second)).expect(200)
  })

  it('ends, with all that came of it, when a cookie comes again after the grace', async () => {
    const { cookie } = await browser('Copied Cookie')
    const thief = await refresh(cookie).expect(200)
    api.clock.forward(GRACE_MS + 1)
    api.published.clear()
    const reply = await refresh(cookie).expect(401)
    expect(reply.body).toMatchObject({ type: type('not-signed-in') })
    expect(api.published.ended).toHaveLength(1)
    await refresh(cookieOf(thief)).expect(401)
    await me((thief.body as { accessToken: string }).accessToken).expect(401)
  })

  it('is renewed by both of two tabs that ask at the same time', async () => {
    const { cookie } = await browser('Same Time')
    const replies = await Promise.all([refresh(cookie), refresh(cookie)])
    expect(replies.map((reply) => reply.status)).toEqual([200, 200])
  })

  it('ends at once when somebody signs out, and says so to its screens', async () => {
    const { token, cookie } = await browser('Signs Out')
    await me(token).expect(200)
    api.published.clear()
    const out = await request(api.url)
      .delete('/api/v1/session')
      .set('Authorization', `Bearer ${token}`)
      .expect(204)
    expect(String(out.get('Set-Cookie'))).toMatch(
      /^bellpull_refresh=; Path=\/api\/v1\/session; Expires=Thu, 01 Jan 1970/,
    )
    expect(api.published.ended).toHaveLength(1)
    await me(token).expect(401)
    await refresh(cookie).expect(401)
  })

  it('can be ended by its cookie when the access token has run out', async () => {
    const { token, cookie } = await browser('Late Leaver')
    api.clock.forward(16 * 60_000)
    await me(token).expect(401)
    const out = request(api.url).delete('/api/v1/session').set('Authorization', `Bearer ${token}`)
    await out.set('Cookie', cookie).expect(204)
    await refresh(cookie).expect(401)
  })

  it('is ended by nobody without a token', async () => {
    expect((await request(api.url).delete('/api/v1/session').expect(401)).body).toMatchObject({
      type: type('not-signed-in'),
    })
    await post('/refresh').expect(401)
  })

  it.each([
    ['unused', [IDLE_MS], 401],
    ['used and renewed', [IDLE_MS - 1, IDLE_MS - 1], 200],
    ['a day old', [IDLE_MS - 1, IDLE_MS - 1, LONGEST_MS - 2 * IDLE_MS + 2], 401],
  ])('%s for so long: %s → %i', async (_what, pauses, status) => {
    let { cookie } = await browser('Long Day')
    for (const [index, pause] of pauses.entries()) {
      api.clock.forward(pause)
      const reply = await refresh(cookie).expect(index === pauses.length - 1 ? status : 200)
      if (reply.status === 200) cookie = cookieOf(reply)
    }
  })

  it('ends for somebody who is disabled, as soon as it is looked at again', async () => {
    const { token, cookie } = await browser('Disabled One')
    await me(token).expect(200)
    await api.rows(`UPDATE person SET active = false WHERE email = $1`, [emailOf('Disabled One')])
    api.clock.forward(BELIEVED_MS)
    await me(token).expect(401)
    await refresh(cookie).expect(401)
    expect(await api.house.live.living([])).toEqual(new Set())
  })

  it('in use is looked at again together with all others, and nobody waits for that', async () => {
    const [one, other] = [await browser('In Use'), await browser('Used Before')]
    await me(one.token).expect(200)
    await me(other.token).expect(200)
    const later = BELIEVED_MS * 0.75
    api.clock.forward(later)
    const asked = vi.spyOn(api.house.database, 'query')
    await me(one.token).expect(200)
    await vi.waitFor(() =>
      expect(asked.mock.calls.filter(([q]) => q.name === 'living-sessions')).toHaveLength(1),
    )
    await Promise.all(asked.mock.results.map(({ value }) => value as Promise<unknown>))
    asked.mockRestore()

    // Read again a moment ago: the other is still believed now, and no longer than after any other look.
    await api.rows(`UPDATE person SET active = false WHERE email = $1`, [emailOf('Used Before')])
    api.clock.forward(later)
    await me(other.token).expect(200)
    api.clock.forward(BELIEVED_MS)
    await me(other.token).expect(401)
    await me(one.token).expect(200)
  })

  it('ends for a person everywhere when the house says so', async () => {
    const { token, person } = await browser('All Screens')
    await me(token).expect(200)
    await api.house.sessions.endSessionsOf(person.id, 'disabled')
    await me(token).expect(401)
    await me(person.token).expect(401)
  })
})

describe('a token', () => {
  it.each([
    ['is missing', ''],
    ['is of another kind', 'Basic YTpi'],
    ['is nonsense', 'Bearer nonsense'],
    ['is signed by nobody', `Bearer ${unsigned()}`],
  ])('that %s is refused before anything else', async (_what, authorization) => {
    const reply = await request(api.url)
      .post('/api/v1/labels/parse')
      .set('Authorization', authorization)
      .set('Content-Type', 'application/json')
      .send('{')
      .expect(401)
    expect(reply.body).toMatchObject({ type: type('not-signed-in') })
  })

  it('is good for a quarter of an hour', async () => {
    const { token } = await browser('Quarter Hour')
    api.clock.forward(15 * 60_000 - 1000)
    await me(token).expect(200)
    api.clock.forward(1000)
    await me(token).expect(401)
  })
})

function unsigned(): string {
  const part = (value: object) => Buffer.from(JSON.stringify(value)).toString('base64url')
  const id = '00000000-0000-4000-8000-000000000000'
  return `${part({ alg: 'none', typ: 'JWT' })}.${part({ sub: id, sid: id, iss: 'bellpull', exp: 4e9 })}.`
}

describe('a PIN', () => {
  it('is right, or wrong, or waits after five wrong ones', async () => {
    const { id } = await api.signInAs('surgeon', 'Pin Holder')
    expect(await api.house.pins.check(id, TEST_PIN)).toBe(true)
    for (let n = 0; n < 5; n += 1) expect(await api.house.pins.check(id, '0000')).toBe(false)
    await expect(api.house.pins.check(id, TEST_PIN)).rejects.toMatchObject({ code: 'too-many-attempts' })
    api.clock.forward(REMEMBERED_MS)
    expect(await api.house.pins.check(id, TEST_PIN)).toBe(true)
  })

  it('of somebody unknown is wrong', async () => {
    expect(await api.house.pins.check('00000000-0000-4000-8000-000000000000', TEST_PIN)).toBe(false)
  })
})
