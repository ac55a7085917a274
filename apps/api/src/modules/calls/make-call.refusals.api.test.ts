import { createHash, randomUUID } from 'node:crypto'
import request from 'supertest'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  type CallOptions,
  type Line,
  type Product,
  type TestCase,
  type TestHouse,
} from '../../../test/house.js'

let house: TestHouse
let where: TestCase
let head: Product
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(async () => {
  house.newTest()
  where = await house.aCase()
  head = await house.aProduct()
  await house.aPackage(head)
})

/** Whether everything is free, or not: the two ways in which a call is made must refuse alike. */
const BOTH_WAYS: readonly (readonly Line[])[] = [[], ['Stool']]
const tryLines = async (extra: readonly Line[], options: CallOptions = {}, of = where) =>
  house.tryCall(of, [[head, 1], ...extra], options)

describe('a call is refused, and leaves no trace', () => {
  test.each(['planned', 'inProgress'])('not while its case is %s', async (status) => {
    const of = await house.aCase({ status })
    await done(house.tryCall(of, [[head, 1]]), 201)
  })

  test.each(['closed', 'cancelled'])('when its case is %s', async (status) => {
    const of = await house.aCase({ status })
    for (const extra of BOTH_WAYS)
      await house.refused(house.tryCall(of, [[head, 1], ...extra]), 'case-closed')
  })

  test.each([
    ['a circulating nurse', () => Promise.resolve(house.people.circulator)],
    ['an inactive surgeon', () => house.aPerson('surgeon', { active: false })],
    ['a scrub person of another team', () => house.aPerson('scrub')],
    ['nobody that is known', () => Promise.resolve({ ...house.people.surgeon, id: randomUUID() })],
  ])('when %s is said to have called', async (_what, whom) => {
    const calledBy = await whom()
    for (const extra of BOTH_WAYS)
      await house.refused(house.tryCall(where, [[head, 1], ...extra], { calledBy }), 'not-a-caller', 422)
  })

  test('when the side is not that of the case, even for a part that fits either', async () => {
    for (const extra of BOTH_WAYS)
      await house.refused(
        house.tryCall(where, [[head, 1], ...extra], { side: 'right' }),
        'side-not-of-case',
        422,
      )
  })

  test('when a part is for the other side; the line is named', async () => {
    const right = await house.aProduct('femur', { side: 'right' })
    await house.aPackage(right)
    const body = await house.refused(
      house.tryCall(where, [
        [head, 1],
        [right, 1],
      ]),
      'side-not-of-case',
      422,
    )
    expect(body['errors']).toEqual([
      { pointer: '/items/1/catalogueItemId', message: 'is a right part; the case is left' },
    ])
  })

  test.each([
    ['is not in the catalogue', () => Promise.resolve({ ...head, id: randomUUID() })],
    ['is no longer in use', () => house.aProduct('head', { active: false })],
  ])('when a product %s; the line is named', async (_what, which) => {
    const unknown = await which()
    const body = await house.refused(
      house.tryCall(where, [
        [head, 1],
        [unknown, 1],
      ]),
      'unknown-item',
      422,
    )
    expect(body['errors']).toMatchObject([{ pointer: '/items/1/catalogueItemId' }])
  })

  test.each([
    'two units of blood',
    'Red cells',
    'cefazolin 2 g',
    'Local: bupivacaine',
    'send specimen',
    'femoral head allograft',
  ])('for %j, which has its own way; the line is named', async (text) => {
    const body = await house.refused(house.tryCall(where, [[head, 1], text]), 'not-called-here', 422)
    expect(body['errors']).toMatchObject([{ pointer: '/items/1/text' }])
  })

  test.each([
    'Drill bit 2.5 mm',
    'Bloodless field tourniquet',
    'Suture 2-0',
    'Cement restrictor',
    'Graft tray',
  ])('but not for %j', async (text) => {
    await done(house.tryCall(where, [text]), 201)
  })

  test('when two of nine lines cannot be read; every fault is named', async () => {
    const body = { ...house.bodyOf([[head, 1]]), side: 'both', hurry: true }
    const refusal = await house.refused(
      house.as(house.people.circulator).post(`/cases/${where.id}/calls`, body),
      'invalid-input',
      422,
    )
    expect((refusal['errors'] as { pointer: string }[]).map(({ pointer }) => pointer).sort()).toEqual([
      '/hurry',
      '/side',
    ])
  })

  test('when a character is no text for PostgreSQL', async () => {
    await house.refused(house.tryCall(where, ['Stool\u0000']), 'invalid-input', 422)
  })

  test.each(['runner', 'core', 'coordinator', 'admin'] as const)('by %s', async (role) => {
    await house.refused(house.tryCall(where, [[head, 1]], { by: house.people[role] }), 'not-permitted', 403)
  })

  test.each(['surgeon', 'scrub', 'circulator', 'charge'] as const)('but not by %s', async (role) => {
    await done(house.tryCall(where, [[head, 1]], { by: house.people[role] }), 201)
  })
})

describe('of several reasons, the first in this order is given', () => {
  const path = (id = where.id) => `/cases/${id}/calls`
  const badBody = { kind: 'early' }

  test('not signed in, before the size and form of the body', async () => {
    const raw = (body: string) =>
      request(house.api.url).post(`/api/v1${path()}`).set('content-type', 'application/json').send(body)
    await house.refused(raw('{'), 'not-signed-in', 401)
    await house.refused(raw(`{"a":"${'x'.repeat(1 << 20)}"}`), 'not-signed-in', 401)
  })

  test.each([
    ['broken', '{', 'malformed-body', 400],
    ['too large', `{"a":"${'x'.repeat(1 << 20)}"}`, 'body-too-large', 413],
  ])('a body that is %s, before the role', async (_what, body, code, status) => {
    const attempt = house.as(house.people.core).post(path()).set('content-type', 'application/json')
    await house.refused(attempt.send(body), code, status)
  })

  test('the role, before the key and the body', async () => {
    await house.refused(house.as(house.people.core).post(path(), badBody, null), 'not-permitted', 403)
  })

  test('the key, before the body', async () => {
    const { circulator } = house.people
    await house.refused(house.as(circulator).post(path(), badBody, null), 'idempotency-key-missing', 422)
    const key = randomUUID()
    await done(house.tryCall(where, [[head, 1]], { key }), 201)
    for (const body of [
      badBody,
      house.bodyOf(['blood']),
      house.bodyOf([[head, 1]], { calledBy: circulator }),
    ])
      await house.refused(house.as(circulator).post(path(), body, key), 'idempotency-key-reused', 422)
  })

  test('the body, before the case', async () => {
    await house.refused(
      house.as(house.people.circulator).post(path(randomUUID()), badBody),
      'invalid-input',
      422,
    )
    await house.refused(house.as(house.people.circulator).post(path('none'), badBody), 'invalid-input', 422)
  })

  test('the case, before what is called for it', async () => {
    const nowhere = { ...where, id: randomUUID() }
    for (const extra of BOTH_WAYS)
      await house.refused(house.tryCall(nowhere, [[head, 1], ...extra], { side: 'right' }), 'not-found', 404)
    await house.refused(house.tryCall({ ...where, id: 'none' }, [[head, 1]]), 'not-found', 404)
  })

  test('who called and what, before whether the case is open', async () => {
    const closed = await house.aCase({ status: 'closed' })
    const { circulator } = house.people
    await house.refused(house.tryCall(closed, [[head, 1]], { calledBy: circulator }), 'not-a-caller', 422)
    await house.refused(house.tryCall(closed, [[head, 1]], { side: 'right' }), 'side-not-of-case', 422)
  })
})

describe('the key', () => {
  test('the same once more, in any order of its fields: the first answer, word for word, and nothing happens', async () => {
    for (const extra of BOTH_WAYS) {
      await house.aPackage(head)
      const key = randomUUID()
      const first = await tryLines(extra, { key })
      expect(first.status).toBe(201)
      const before = await house.stored()
      house.api.published.clear()
      const turned = Object.fromEntries(Object.entries(house.bodyOf([[head, 1], ...extra])).reverse())
      const again = await house.as(house.people.circulator).post(`/cases/${where.id}/calls`, turned, key)
      expect([again.status, again.text]).toEqual([201, first.text])
      expect(await house.stored()).toEqual(before)
      expect(house.api.published.all).toEqual([])
    }
  })

  test('the first answer even after the call has gone on', async () => {
    const key = randomUUID()
    const first = await tryLines([], { key })
    await done(
      house.onCall(
        house.people.circulator,
        await done(house.tryCall(where, [[head, 1]], { key }), 201),
        'readBack',
      ),
    )
    expect((await tryLines([], { key })).text).toBe(first.text)
  })

  test('with another body it is refused, on this path', async () => {
    const key = randomUUID()
    await done(house.tryCall(where, [[head, 1]], { key }), 201)
    await house.refused(house.tryCall(where, [[head, 2]], { key }), 'idempotency-key-reused', 422)
  })

  test('of another person, or on another path, is another key', async () => {
    const key = randomUUID()
    const ids = new Set<string>()
    const elsewhere = await house.aCase()
    ids.add((await done(house.tryCall(where, [[head, 1]], { key }), 201)).id)
    ids.add((await done(house.tryCall(where, [[head, 1]], { key, by: house.people.charge }), 201)).id)
    ids.add((await done(house.tryCall(elsewhere, [[head, 1]], { key }), 201)).id)
    expect(ids.size).toBe(3)
  })

  test('written in capitals it is the same key', async () => {
    const key = randomUUID()
    const first = await done(house.tryCall(where, [[head, 1]], { key }), 201)
    expect((await done(house.tryCall(where, [[head, 1]], { key: key.toUpperCase() }), 201)).id).toBe(first.id)
  })

  test('of a refusal is free: the same request is looked at again', async () => {
    const key = randomUUID()
    const of = await house.aCase({ status: 'closed' })
    await house.refused(house.tryCall(of, [[head, 1]], { key }), 'case-closed')
    await house.rows(`UPDATE surgical_case SET status = 'inProgress', closed_at = NULL WHERE id = $1`, [
      of.id,
    ])
    await done(house.tryCall(of, [[head, 1]], { key }), 201)
  })

  test('stands for 24 hours', async () => {
    const key = randomUUID()
    const first = await done(house.tryCall(where, [[head, 1]], { key }), 201)
    house.api.clock.forward(24 * 3_600_000 - 1)
    expect((await done(house.tryCall(where, [[head, 1]], { key }), 201)).id).toBe(first.id)
    house.api.clock.forward(1)
    expect((await done(house.tryCall(where, [[head, 1]], { key }), 201)).id).not.toBe(first.id)
  })

  test('that is no UUID is refused', async () => {
    await house.refused(house.tryCall(where, [[head, 1]], { key: 'again' }), 'invalid-input', 422)
  })

  test('is kept with a hash of what was asked, not with the request', async () => {
    const key = randomUUID()
    await done(house.tryCall(where, [[head, 1]], { key }), 201)
    const [kept] = await house.rows<Record<string, unknown>>('SELECT * FROM idempotency_key WHERE key = $1', [
      key,
    ])
    expect(Object.keys(kept!).sort()).toEqual(
      ['answer', 'created_at', 'key', 'method', 'path', 'person_id', 'request_hash', 'status'].sort(),
    )
    expect((kept!['request_hash'] as Buffer).length).toBe(createHash('sha256').update('').digest().length)
  })
})

test('an id in capitals is the same id: held at once or carefully, the call is made', async () => {
  for (const extra of BOTH_WAYS) {
    await house.aPackage(head)
    const loud = { ...head, id: head.id.toUpperCase() }
    expect(
      itemOf(await house.call({ ...where, id: where.id.toUpperCase() }, [[loud, 1], ...extra])).hold,
    ).toBe('held')
  }
})
