import type { CallView } from '@bellpull/contracts'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  type Product,
  type TestCase,
  type TestHouse,
} from '../../../test/house.js'

let house: TestHouse
let mine: TestCase
let other: TestCase
let head: Product
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(async () => {
  house.newTest()
  mine = await house.aCase()
  other = await house.aCase({ room: house.rooms[1] })
  head = await house.aProduct()
})

const confirm = (call: CallView, rest: object = {}) =>
  house.onCall(house.people.surgeon, call, 'confirm', rest)
const onBoard = async (call: CallView) => (await house.board()).calls.find(({ id }) => id === call.id)
const readBackCall = async (where: TestCase, kind: 'early' | 'standby' | 'confirmed', quantity = 1) =>
  house.readBack(
    await house.call(where, [[head, quantity]], { kind, ...(kind !== 'standby' && { inMinutes: 30 }) }),
  )

describe('an early or stand-by call becomes confirmed', () => {
  test('keeping the time it was called for', async () => {
    await house.aPackage(head)
    const call = await readBackCall(mine, 'early')
    house.api.published.clear()
    const confirmed = await done(confirm(call))
    expect(confirmed).toMatchObject({
      kind: 'confirmed',
      neededAt: call.neededAt,
      confirmedAt: house.api.clock.now().toISOString(),
      calledAt: call.calledAt,
      version: call.version + 1,
      revision: call.revision + 1,
      items: [{ hold: 'held', unit: { id: itemOf(call).unit?.id }, version: 1 }],
    })
    expect(house.api.published.deltas).toEqual([
      { roomId: mine.room.id, revision: confirmed.revision, event: 'call.confirmed', call: confirmed },
    ])
  })

  test('for another time', async () => {
    await house.aPackage(head)
    const confirmed = await done(confirm(await readBackCall(mine, 'early'), { neededInMinutes: 0 }))
    expect(confirmed.neededAt).toBe(house.api.clock.now().toISOString())
  })

  test('from stand by only with a time', async () => {
    await house.aPackage(head)
    const call = await readBackCall(mine, 'standby')
    const body = await house.refused(confirm(call), 'invalid-input', 422)
    expect(body['errors']).toMatchObject([{ pointer: '/neededInMinutes' }])
    const confirmed = await done(confirm(call, { neededInMinutes: 15 }))
    expect(confirmed.neededAt).toBe(new Date(house.api.clock.now().getTime() + 900_000).toISOString())
  })

  test('not before it is read back', async () => {
    await house.refused(confirm(await house.call(mine, [[head, 1]], { kind: 'early' })), 'not-read-back')
  })

  test('not twice', async () => {
    const confirmed = await done(confirm(await readBackCall(mine, 'early')))
    await house.refused(confirm(confirmed), 'call-moved-on')
    await house.refused(confirm(await readBackCall(mine, 'confirmed')), 'call-moved-on')
  })

  test('what had none free tries again, and takes what has come back', async () => {
    const call = await readBackCall(mine, 'early')
    const unit = await house.aPackage(head)
    const confirmed = await done(confirm(call))
    expect(itemOf(confirmed)).toMatchObject({ hold: 'held', unit: { id: unit.id }, stage: 'called' })
    const types = await house.rows<{ type: string }>(
      'SELECT type FROM event WHERE call_id = $1 ORDER BY seq',
      [call.id],
    )
    expect(types.map(({ type }) => type)).toEqual([
      'call.called',
      'call.readBack',
      'call.confirmed',
      'item.heldAgain',
    ])
  })
})

describe('confirmed goes before early', () => {
  /** The other room holds the only package, early; this room has none free. */
  const contested = async () => {
    const unit = await house.aPackage(head)
    const early = await house.call(other, [[head, 1]], { kind: 'early', inMinutes: 60 })
    return { unit, early, waiting: await readBackCall(mine, 'early') }
  }

  test.each(['called', 'accepted'])(
    'takes the hold of another room while its item is %s; both rooms are told',
    async (stage) => {
      const { unit, waiting, early } = await contested()
      if (stage === 'accepted') await done(house.onCall(house.people.runner, early, 'accept'))
      const before = await house.board()
      house.api.published.clear()

      const confirmed = await done(confirm(waiting))

      expect(itemOf(confirmed)).toMatchObject({ hold: 'held', unit: { id: unit.id } })
      expect(await house.unitRow(unit.id)).toMatchObject({ state: 'held', held_for: itemOf(confirmed).id })
      const lost = await onBoard(early)
      expect(lost?.items[0]).toMatchObject({
        hold: 'noneFree',
        stage: 'called',
        unit: null,
        acceptedBy: null,
        heldBy: [{ room: { id: mine.room.id, number: mine.room.number }, kind: 'confirmed' }],
      })
      const board = await house.board()
      for (const { room } of [mine, other])
        expect(board.revisions[room.id]).toBe((before.revisions[room.id] ?? 0) + 1)
      expect(house.api.published.deltas).toHaveLength(2)
      for (const delta of house.api.published.deltas)
        expect(delta.call).toEqual(delta.roomId === mine.room.id ? confirmed : lost)
      expect(house.api.published.notices).toMatchObject([
        { kind: 'hold.taken', roomId: other.room.id, heldAgain: false },
      ])
      const events = await house.rows(
        'SELECT type, data FROM event WHERE call_id = $1 ORDER BY seq DESC LIMIT 1',
        [early.id],
      )
      expect(events).toMatchObject([
        { type: 'item.holdLost', data: { toRoomId: mine.room.id, toCallId: waiting.id } },
      ])
    },
  )

  test('the early one is held again when its own room has a package', async () => {
    const { unit, waiting, early } = await contested()
    await done(house.onCall(house.people.runner, early, 'accept'))
    const own = await house.aPackage(head, { at: other.room.cart })
    const confirmed = await done(confirm(waiting))
    expect(itemOf(confirmed).unit?.id).toBe(unit.id)
    expect((await onBoard(early))?.items[0]).toMatchObject({
      hold: 'held',
      unit: { id: own.id },
      stage: 'accepted',
    })
    expect(house.api.published.notices).toContainEqual(
      expect.objectContaining({ kind: 'hold.taken', heldAgain: true }),
    )
    await house.refused(
      house.onItem(house.people.runner, itemOf((await onBoard(early))!), 'undo'),
      'nothing-to-undo',
    )
  })

  test('what has been pulled is never taken', async () => {
    const { unit, waiting, early } = await contested()
    await done(house.onItem(house.people.core, itemOf(early), 'pull', { scan: scanOf(unit) }))
    const confirmed = await done(confirm(waiting))
    expect(itemOf(confirmed)).toMatchObject({ hold: 'noneFree', heldBy: [{ kind: 'early' }] })
    expect((await onBoard(early))?.items[0]).toMatchObject({ stage: 'pulled', unit: { id: unit.id } })
  })

  test.each([
    ['has been recalled', `state = 'recalled'`],
    ['is not sterile', 'sterile = false'],
    ['expired yesterday', `use_by_on = '2026-11-30'`],
  ])('what %s is not taken', async (_what, change) => {
    const { unit, waiting } = await contested()
    await house.rows(`UPDATE unit SET ${change} WHERE id = $1`, [unit.id])
    expect(itemOf(await done(confirm(waiting))).hold).toBe('noneFree')
  })

  test('what lies in another room is not taken', async () => {
    const unit = await house.aPackage(head, { at: other.room.cart })
    const early = await house.call(other, [[head, 1]], { kind: 'early' })
    expect(itemOf(early).unit?.id).toBe(unit.id)
    expect(itemOf(await done(confirm(await readBackCall(mine, 'early')))).hold).toBe('noneFree')
  })

  test('an early call of the same room is no better off, wherever its package lies', async () => {
    const next = await house.aCase()
    const unit = await house.aPackage(head, { at: mine.room.cart })
    const early = await house.call(next, [[head, 1]], { kind: 'early', inMinutes: 120 })
    const confirmed = await done(confirm(await readBackCall(mine, 'early'), { neededInMinutes: 0 }))
    expect(itemOf(confirmed).unit?.id).toBe(unit.id)
    expect((await onBoard(early))?.items[0]?.hold).toBe('noneFree')
  })

  test('two items take from two rooms', async () => {
    const third = await house.aCase({ room: house.rooms[2] })
    await house.aPackage(head)
    await house.aPackage(head)
    for (const where of [other, third]) await house.call(where, [[head, 1]], { kind: 'early' })
    const waiting = await readBackCall(mine, 'early', 2)
    expect(waiting.items.map(({ hold }) => hold)).toEqual(['noneFree', 'noneFree'])
    house.api.published.clear()
    const confirmed = await done(confirm(waiting))
    expect(confirmed.items.map(({ hold }) => hold)).toEqual(['held', 'held'])
    const told = house.api.published.deltas.map(({ roomId }) => roomId).sort()
    expect(told).toEqual([mine, other, third].map(({ room }) => room.id).sort())
  })

  test('a call does not take from itself', async () => {
    await house.aPackage(head)
    const waiting = await readBackCall(mine, 'early', 2)
    const confirmed = await done(confirm(waiting))
    expect(confirmed.items.map(({ hold }) => hold)).toEqual(['held', 'noneFree'])
  })
})
