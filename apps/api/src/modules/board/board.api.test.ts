import { randomUUID } from 'node:crypto'
import { boardSnapshot, callView } from '@bellpull/contracts'
import { ROLES } from '@bellpull/domain'
import { z } from 'zod'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { done, itemOf, openHouse, type TestHouse } from '../../../test/house.js'

let house: TestHouse
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(() => house.newTest())

describe('the board', () => {
  test('of a house in which nothing has happened has every room at 0 and no calls', async () => {
    const fresh = await openHouse()
    const board = boardSnapshot.parse((await fresh.as(fresh.people.core).get('/board').expect(200)).body)
    expect(board).toEqual({ revisions: Object.fromEntries(fresh.rooms.map(({ id }) => [id, 0])), calls: [] })
    await fresh.api.close()
  })

  test.each(ROLES)('is shown to %s', async (role) => {
    const reply = await house.as(house.people[role]).get('/board')
    expect(reply.status).toBe(200)
    expect(boardSnapshot.safeParse(reply.body).success).toBe(true)
  })

  test('has every open call with all its items, settled ones too, and no call that is done', async () => {
    const where = await house.aCase()
    const done1 = await house.call(where, ['Stool'])
    await done(house.onItem(house.people.surgeon, itemOf(done1), 'cancel'))
    const open = await house.call(where, ['Stool', 'Lamp'])
    await done(house.onItem(house.people.surgeon, itemOf(open), 'cancel'))
    const { calls } = await house.board()
    expect(calls.find(({ id }) => id === done1.id)).toBeUndefined()
    expect(calls.find(({ id }) => id === open.id)?.items.map(({ outcome }) => outcome)).toEqual([
      'cancelled',
      null,
    ])
  })

  test('rows and revisions are of one moment: no call is newer than its room', async () => {
    await house.call(await house.aCase(), ['Stool'])
    const { calls, revisions } = await house.board()
    for (const { room, revision } of calls) expect(revision).toBeLessThanOrEqual(revisions[room.id]!)
  })

  test('refuses what it does not know, and whom it does not know', async () => {
    await house.refused(house.as(house.people.core).get('/board?room=1'), 'invalid-input', 422)
    await house.refused(house.as(null).get('/board'), 'not-signed-in', 401)
  })

  test('a package that expires overnight is no longer among the alternatives', async () => {
    const systemId = await house.aSystem()
    const head = await house.aProduct('head', { systemId })
    const near = await house.aProduct('head', { size: '52', systemId })
    await house.aPackage(near, { useByOn: house.api.clock.today() })
    const call = await house.call(await house.aCase(), [[head, 1]])
    const alternatives = async () =>
      (await house.board()).calls
        .find(({ id }) => id === call.id)
        ?.items[0]?.alternatives.map(({ catalogueItemId }) => catalogueItemId)
    expect(await alternatives()).toEqual([near.id])
    house.api.clock.forward(24 * 3_600_000)
    expect(await alternatives()).toEqual([])
  })
})

describe('the calls of a case', () => {
  test('are all there, done ones too, the oldest first', async () => {
    const where = await house.aCase()
    const first = await house.call(where, ['Stool'])
    house.api.clock.forward(1_000)
    const second = await house.call(where, ['Lamp'])
    const cancelled = await done(house.onItem(house.people.surgeon, itemOf(first), 'cancel'))
    await house.call(await house.aCase(), ['Stool'])
    const reply = await house.as(house.people.scrub).get(`/cases/${where.id}/calls`).expect(200)
    expect(z.array(callView).parse(reply.body)).toEqual([cancelled, second])
  })

  test('are none for a case without, and not found for no case', async () => {
    const { id } = await house.aCase()
    expect((await house.as(house.people.core).get(`/cases/${id}/calls`).expect(200)).body).toEqual([])
    await house.refused(house.as(house.people.core).get(`/cases/${randomUUID()}/calls`), 'not-found', 404)
    await house.refused(house.as(house.people.core).get('/cases/none/calls'), 'not-found', 404)
  })
})
