import type { CallView } from '@bellpull/contracts'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  type Package,
  type Person,
  type Product,
  type TestCase,
  type TestHouse,
} from '../../../test/house.js'

let house: TestHouse
let where: TestCase
let head: Product
let unit: Package
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(async () => {
  house.newTest()
  where = await house.aCase()
  head = await house.aProduct()
  unit = await house.aPackage(head, { at: house.places.binB })
})

const MINUTES = 60_000
const give = (call: CallView, name: string, body: object = {}, who: Person = house.people.circulator) =>
  house.onItem(who, itemOf(call), name, body)
const onBoard = async (call: CallView) => (await house.board()).calls.find(({ id }) => id === call.id)

describe('opening', () => {
  test('for a quarter of an hour after verifying, without another scan', async () => {
    const call = await house.verified(where, unit)
    house.api.clock.forward(15 * MINUTES)
    expect(itemOf(await done(give(call, 'open'))).stage).toBe('opened')
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'opened', held_for: itemOf(call).id })
  })

  test('later only with the label scanned again, and the same package', async () => {
    const call = await house.verified(where, unit)
    house.api.clock.forward(15 * MINUTES + 1)
    await house.refused(give(call, 'open'), 'verify-again')
    const other = await house.aPackage(head)
    await house.refused(give(call, 'open', { scan: scanOf(other) }), 'not-the-pulled-unit')
    const opened = await done(give(call, 'open', { scan: scanOf(unit) }))
    expect(itemOf(opened).stage).toBe('opened')
    const [event] = await house.rows<{ data: object }>(
      `SELECT data FROM event WHERE call_id = $1 AND type = 'item.opened'`,
      [call.id],
    )
    expect(event?.data).toMatchObject({ scannedAgain: true, lot: unit.lot })
  })

  test.each([
    ['unit-recalled', `state = 'recalled'`],
    ['unit-quarantined', `state = 'quarantined'`],
    ['unit-expired', `use_by_on = '2026-11-30'`],
    ['unit-not-sterile', `sterile = false`],
  ])('not when the package may no longer be used: %s', async (code, change) => {
    const call = await house.verified(where, unit)
    await house.rows(`UPDATE unit SET ${change} WHERE id = $1`, [unit.id])
    await house.refused(give(call, 'open'), code)
  })

  test('not when its last day ended between verifying and opening', async () => {
    unit = await house.aPackage(head, { useByOn: house.api.clock.today() })
    const call = await house.verified(where, unit)
    house.api.clock.forward(24 * 60 * MINUTES)
    await house.refused(give(call, 'open', { scan: scanOf(unit) }), 'unit-expired')
  })
})

describe('putting back', () => {
  test.each(['pulled', 'inRoom', 'verified'])(
    'what is %s: an end for the item, a task for the package',
    async (stage) => {
      let call =
        stage === 'verified' ? await house.verified(where, unit) : await house.broughtIn(where, [unit])
      if (stage === 'pulled') call = await done(give(call, 'undo', {}, house.people.runner))
      expect(itemOf(call).stage).toBe(stage)
      const back = await done(give(call, 'putBack', { reason: 'Smaller one fits' }))
      expect(itemOf(back)).toMatchObject({
        stage,
        outcome: 'returned',
        reason: 'Smaller one fits',
        putBack: {
          toCode: 'B-01',
          since: house.api.clock.now().toISOString(),
          inspect: false,
          walkOrder: 20,
        },
      })
      expect(await house.unitRow(unit.id)).toMatchObject({ state: 'putBack', held_for: null })
      expect(back.open).toBe(true)
      expect(await onBoard(back)).toEqual(back)
      await house.refused(give(back, 'undo'), 'nothing-to-undo')
    },
  )

  test('shelved in its own bin, by whoever may, it is free for everybody and the call is done', async () => {
    const call = await done(give(await house.broughtIn(where, [unit]), 'putBack'))
    const wrong = await house.refused(
      give(call, 'shelve', { binCode: 'A-01' }, house.people.core),
      'invalid-input',
      422,
    )
    expect(wrong).toMatchObject({
      detail: 'This package belongs in B-01.',
      errors: [{ pointer: '/binCode' }],
    })
    const shelved = await done(give(call, 'shelve', { binCode: 'b-01' }, house.people.coordinator))
    expect(itemOf(shelved)).toMatchObject({ outcome: 'returned', putBack: null })
    expect(shelved.open).toBe(false)
    expect(await onBoard(shelved)).toBeUndefined()
    expect(await house.unitRow(unit.id)).toEqual({ state: 'available', held_for: null, code: 'B-01' })
    expect(itemOf(await house.call(where, [[head, 1]])).unit?.id).toBe(unit.id)
    await house.refused(give(shelved, 'shelve'), 'item-moved-on')
  })

  test('shelved without a bin code it goes to its own', async () => {
    const call = await done(give(await house.broughtIn(where, [unit]), 'putBack'))
    await done(give(call, 'shelve'))
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'available', code: 'B-01' })
  })

  test.each([
    ['from an infected case', { infected: true }, {}],
    ['found damaged when shelved', {}, { inspect: true, binCode: 'A-01' }],
  ])('%s it goes to be looked at, not to the shelf', async (_what, putBack, shelve) => {
    const call = await done(give(await house.broughtIn(where, [unit]), 'putBack', putBack))
    expect(itemOf(call).putBack?.inspect).toBe('infected' in putBack)
    const shelved = await done(give(call, 'shelve', shelve))
    expect(shelved.open).toBe(false)
    expect(await house.unitRow(unit.id)).toEqual({ state: 'quarantined', held_for: null, code: 'Q-1' })
    expect(itemOf(await house.call(where, [[head, 1]])).hold).toBe('noneFree')
  })

  test('recalled on its way back, it never comes to the shelf', async () => {
    const call = await done(give(await house.broughtIn(where, [unit]), 'putBack'))
    await house.rows(`UPDATE unit SET state = 'recalled' WHERE id = $1`, [unit.id])
    await done(give(call, 'shelve', { binCode: 'B-01' }))
    expect(await house.unitRow(unit.id)).toEqual({ state: 'recalled', held_for: null, code: 'Q-1' })
  })

  test('rooms that have none free are told that stock came back, and nothing is held by itself', async () => {
    const call = await house.broughtIn(where, [unit])
    const waiting = await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]])
    const back = await done(give(call, 'putBack'))
    house.api.published.clear()
    await done(give(back, 'shelve'))
    expect(house.api.published.notices).toEqual([
      {
        kind: 'stock.returned',
        catalogueItemId: head.id,
        itemId: itemOf(waiting).id,
        callId: waiting.id,
        roomId: waiting.room.id,
      },
    ])
    expect(await onBoard(waiting)).toMatchObject({ version: 1, items: [{ hold: 'noneFree' }] })
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'available' })
  })
})

describe('cancelling', () => {
  test.each(['called', 'accepted'])('what is %s: the hold is let go where it lies', async (stage) => {
    let call = await house.call(where, [[head, 1]])
    if (stage === 'accepted') call = await done(give(call, 'accept'))
    const cancelled = await done(give(call, 'cancel', { reason: 'Size changed' }, house.people.surgeon))
    expect(itemOf(cancelled)).toMatchObject({
      stage,
      outcome: 'cancelled',
      reason: 'Size changed',
      putBack: null,
      unit: null,
    })
    expect(cancelled.open).toBe(false)
    expect(await house.unitRow(unit.id)).toEqual({ state: 'available', held_for: null, code: 'B-01' })
  })

  test.each(['inRoom', 'verified'])('what is %s: a put-back', async (stage) => {
    const call =
      stage === 'verified' ? await house.verified(where, unit) : await house.broughtIn(where, [unit])
    const cancelled = await done(give(call, 'cancel', {}, house.people.scrub))
    expect(itemOf(cancelled)).toMatchObject({
      stage,
      outcome: 'cancelled',
      putBack: { toCode: 'B-01' },
      unit: { id: unit.id },
    })
    expect(cancelled.open).toBe(true)
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'putBack', held_for: null })
    expect((await done(give(cancelled, 'shelve'))).open).toBe(false)
  })

  test('what has none free, and what was called in words', async () => {
    const none = await house.call(where, [[await house.aProduct(), 1]])
    expect(itemOf(await done(give(none, 'cancel')))).toMatchObject({
      outcome: 'cancelled',
      alternatives: [],
      heldBy: [],
    })
    expect(itemOf(await done(give(await house.call(where, ['Stool']), 'cancel'))).outcome).toBe('cancelled')
  })

  test.each(['recalled', 'quarantined'])(
    'what has been %s meanwhile stays that, and nobody is told that it is free',
    async (state) => {
      const call = await house.call(where, [[head, 1]])
      await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]])
      await house.rows('UPDATE unit SET state = $2 WHERE id = $1', [unit.id, state])
      house.api.published.clear()
      await done(give(call, 'cancel'))
      expect(await house.unitRow(unit.id)).toMatchObject({ state, held_for: null })
      expect(house.api.published.notices).toEqual([])
    },
  )

  test('a whole call: all that is open, in one revision; what was put back is left alone', async () => {
    const second = await house.aPackage(await house.aProduct('stem'))
    let call = await house.broughtIn(where, [unit, second])
    call = await done(give(call, 'putBack'))
    house.api.published.clear()
    const cancelled = await done(
      house.onCall(house.people.surgeon, call, 'cancel', { reason: 'Plan changed' }),
    )
    expect(cancelled.items.map(({ outcome }) => outcome)).toEqual(['returned', 'cancelled'])
    expect(cancelled.revision).toBe(call.revision + 1)
    expect(house.api.published.deltas.map(({ call: told }) => told)).toEqual([cancelled])
    const types = await house.rows<{ type: string }>(
      'SELECT type FROM event WHERE call_id = $1 ORDER BY seq DESC LIMIT 2',
      [call.id],
    )
    expect(types.map(({ type }) => type).sort()).toEqual(['call.cancelled', 'item.cancelled'])
  })

  test('a whole call is refused once anything of it has been opened, settled or not', async () => {
    const second = await house.aPackage(await house.aProduct('stem'))
    let call = await house.broughtIn(where, [unit, second])
    const checks = { scan: scanOf(unit), intact: true, secondCheck: house.pin(house.people.scrub) }
    call = await done(give(call, 'verify', checks))
    call = await done(give(call, 'open'))
    await house.refused(house.onCall(house.people.circulator, call, 'cancel'), 'call-moved-on')
    call = await done(give(call, 'implant'))
    await house.refused(house.onCall(house.people.circulator, call, 'cancel'), 'call-moved-on')
    expect(
      itemOf(await done(house.onItem(house.people.circulator, itemOf(call, 1), 'cancel')), 1).outcome,
    ).toBe('cancelled')
  })
})
