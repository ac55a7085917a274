import { randomUUID } from 'node:crypto'
import { eventsPage, type EventView } from '@bellpull/contracts'
import { ROLES } from '@bellpull/domain'
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { writeCursor, readCursor } from './cursor.js'
import { done, itemOf, openHouse, type Product, type TestHouse } from '../../../test/house.js'
import { holdLock, untilWaiting, type Rival } from '../../../test/rival.js'

let house: TestHouse
let head: Product
let rival: Rival | undefined
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(async () => {
  house.newTest()
  head = await house.aProduct()
})
afterEach(() => rival?.letGo())

const get = (query: string, who = house.people.charge) => house.as(who).get(`/events${query}`)
const page = async (query: string) => eventsPage.parse((await get(query).expect(200)).body)

/** Everything from here on, in pages, until nothing is left; with the cursor to go on from. */
async function readOn(
  query: string,
  after: string | null = null,
): Promise<{ items: EventView[]; after: string | null }> {
  const items: EventView[] = []
  for (;;) {
    const next = await page(`${query}${after === null ? '' : `${query === '' ? '?' : '&'}after=${after}`}`)
    if (next.nextCursor === null) return { items, after }
    items.push(...next.items)
    after = next.nextCursor
  }
}
const types = (items: readonly EventView[]) => items.map(({ type }) => type)

describe('who may read what happened', () => {
  test.each(ROLES)(
    '%s: of a case or call everybody; of the house the charge nurse and the administrator',
    async (role) => {
      const where = await house.aCase()
      const call = await house.call(where, ['Stool'])
      const who = house.people[role]
      expect((await get(`?case=${where.id}`, who)).status).toBe(200)
      expect((await get(`?call=${call.id}`, who)).status).toBe(200)
      expect((await get('', who)).status).toBe(role === 'charge' || role === 'admin' ? 200 : 403)
      expect((await get('?limit=nonsense', who)).status).toBe(
        role === 'charge' || role === 'admin' ? 422 : 403,
      )
    },
  )

  test('nobody who is not signed in', async () => {
    await house.refused(house.as(null).get('/events'), 'not-signed-in', 401)
  })

  test.each([
    ['?limit=0', 'invalid-input', 422],
    ['?limit=501', 'invalid-input', 422],
    ['?since=2026', 'invalid-input', 422],
    ['?case=none', 'invalid-input', 422],
    ['?after=nonsense', 'invalid-input', 422],
    [`?after=${Buffer.from('{"a":1}').toString('base64url')}`, 'invalid-input', 422],
    [`?case=${randomUUID()}`, 'not-found', 404],
    [`?call=${randomUUID()}`, 'not-found', 404],
  ] as const)('%s is refused as %s', async (query, code, status) => {
    await house.refused(get(query), code, status)
  })
})

describe('what is told', () => {
  test('of a case, of one of its calls, and of nothing else', async () => {
    const [where, elsewhere] = [await house.aCase(), await house.aCase()]
    const first = await house.readBack(await house.call(where, ['Stool']))
    const second = await house.call(where, ['Lamp'])
    await house.call(elsewhere, ['Stool'])
    expect(types((await page(`?case=${where.id}`)).items)).toEqual([
      'call.called',
      'call.readBack',
      'call.called',
    ])
    expect(types((await page(`?call=${first.id}`)).items)).toEqual(['call.called', 'call.readBack'])
    expect(types((await page(`?case=${where.id}&call=${second.id}`)).items)).toEqual(['call.called'])
    expect((await page(`?case=${elsewhere.id}&call=${second.id}`)).items).toEqual([])
  })

  test('who, when, what about; the newest last', async () => {
    const where = await house.aCase()
    const unit = await house.aPackage(head)
    const call = await house.call(where, [[head, 1]])
    house.api.clock.forward(1_000)
    await done(house.onItem(house.people.runner, itemOf(call), 'accept'))
    const { items } = await page(`?call=${call.id}`)
    expect(items[0]).toMatchObject({
      type: 'call.called',
      at: call.calledAt,
      caseId: where.id,
      callId: call.id,
      itemId: null,
      roomId: where.room.id,
      actor: { id: house.people.circulator.id, initials: 'CI' },
      data: { kind: 'confirmed', items: [{ itemId: itemOf(call).id, hold: 'held', unitId: unit.id }] },
    })
    expect(items[1]).toMatchObject({
      type: 'item.accepted',
      itemId: itemOf(call).id,
      actor: { initials: 'RU' },
    })
    expect(new Set(items.map(({ id }) => id)).size).toBe(2)
  })

  test('page by page, each event once, whatever the size of the pages', async () => {
    const where = await house.aCase()
    const other = await house.aCase({ room: house.rooms[1] })
    for (let n = 0; n < 4; n += 1)
      for (const of of [where, other]) {
        house.api.clock.forward(500)
        await house.readBack(await house.call(of, ['Stool']))
      }
    const all = (await readOn('?limit=500')).items
    expect(new Set(all.map(({ id }) => id)).size).toBe(all.length)
    expect(all.map(({ at }) => at)).toEqual(all.map(({ at }) => at).sort())
    for (const limit of [1, 3]) expect((await readOn(`?limit=${limit}`)).items).toEqual(all)
    const ofCase = all.filter(({ caseId }) => caseId === where.id)
    expect((await readOn(`?case=${where.id}&limit=3`)).items).toEqual(ofCase)
    expect(ofCase).toHaveLength(8)
  })

  test('a cursor at the end goes on from there once more has happened', async () => {
    const { after } = await readOn('?limit=500')
    const query = '?limit=500'
    expect((await readOn(query, after)).items).toEqual([])
    await house.call(await house.aCase(), ['Stool'])
    expect(types((await readOn(query, after)).items)).toEqual(['call.called'])
  })

  test('events of one step stand together and in order, at one time', async () => {
    const where = await house.aCase()
    const unit = await house.aPackage(head)
    const call = await house.call(where, [[head, 1], 'Stool'])
    await done(house.onCall(house.people.surgeon, call, 'cancel', { reason: 'Plan changed' }))
    const { items } = await page(`?call=${call.id}`)
    expect(types(items)).toEqual(['call.called', 'item.cancelled', 'item.cancelled', 'call.cancelled'])
    expect(new Set(items.slice(1).map(({ at }) => at)).size).toBe(1)
    expect(items[1]?.data).toMatchObject({ unitId: unit.id, lot: unit.lot, reason: 'Plan changed' })
  })
})

describe('what commits late', () => {
  test('is not skipped: a cursor taken meanwhile finds it, though others were later and told sooner', async () => {
    const slow = await house.aCase({ room: house.rooms[1] })
    const { after } = await readOn('?limit=500')
    // A call of room 2 has been begun, with its time, and waits; the others go on.
    rival = await holdLock(house.api, 'SELECT 1 FROM room WHERE id = $1 FOR UPDATE', [slow.room.id])
    const late = house.tryCall(slow, ['Stool']).then((reply) => reply)
    await untilWaiting(house.api, 1)
    house.api.clock.forward(5_000)
    await house.call(await house.aCase(), ['Lamp'])
    const meanwhile = await readOn('?limit=500', after)
    expect(types(meanwhile.items)).toEqual(['call.called'])
    await rival.letGo()
    expect((await late).status).toBe(201)
    const rest = (await readOn('?limit=500', meanwhile.after)).items
    expect(rest.map(({ caseId }) => caseId)).toEqual([slow.id])
    expect(rest[0]!.at < meanwhile.items[0]!.at).toBe(true)
  })

  test('in one room never has an earlier time than what was told before it', async () => {
    const where = await house.aCase()
    rival = await holdLock(house.api, 'SELECT 1 FROM room WHERE id = $1 FOR UPDATE', [where.room.id])
    const first = house.tryCall(where, ['Stool']).then((reply) => reply)
    await untilWaiting(house.api, 1)
    house.api.clock.forward(-3_000)
    const second = house.tryCall(where, ['Lamp']).then((reply) => reply)
    await untilWaiting(house.api, 2)
    await rival.letGo()
    await Promise.all([first, second])
    // By their numbers, not by their times: a page is sorted by time as well.
    const told = await house.rows<{ at: Date }>('SELECT at FROM event WHERE case_id = $1 ORDER BY seq', [
      where.id,
    ])
    expect(told).toHaveLength(2)
    expect(told[1]!.at.getTime()).toBeGreaterThanOrEqual(told[0]!.at.getTime())
  })
})

describe('the log is append-only', () => {
  test.each([
    `UPDATE event SET type = 'item.opened'`,
    'DELETE FROM event',
    'TRUNCATE event',
    `UPDATE movement SET why = 'other'`,
    'DELETE FROM movement',
    'TRUNCATE movement',
  ])('even for the owner of the tables: %s', async (statement) => {
    const unit = await house.aPackage(head)
    await house.broughtIn(await house.aCase(), [unit])
    await expect(house.rows(statement)).rejects.toThrow(/append-only/)
  })
})

test('a cursor is opaque, comes back as it was, and is none when it is not ours', () => {
  const cursor = { [randomUUID()]: 3, [randomUUID()]: 0 }
  expect(readCursor(writeCursor(cursor))).toEqual(cursor)
  for (const text of [
    '',
    'e30x!',
    Buffer.from('[]').toString('base64url'),
    Buffer.from('{"x":1}').toString('base64url'),
  ])
    expect(readCursor(text)).toBeNull()
})
