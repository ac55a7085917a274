import type { CallView } from '@bellpull/contracts'
import { UNDOABLE, type UndoableCommand } from '@bellpull/domain'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  type Package,
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
  unit = await house.aPackage(head)
})

const me = () => house.people.circulator
const give = (call: CallView, name: string, body: object = {}, who = me()) =>
  house.onItem(who, itemOf(call), name, body)

/** The call just before each step that can be taken back, and what the step is given. */
const BEFORE: Record<UndoableCommand, () => Promise<CallView>> = {
  accept: () => house.call(where, [[unit.product, 1]]),
  pull: async () => done(give(await house.call(where, [[unit.product, 1]]), 'accept')),
  deliver: async () => done(give(await BEFORE.pull(), 'pull', { scan: scanOf(unit) })),
  verify: () => house.broughtIn(where, [unit]),
  implant: () => house.opened(where, unit),
  use: async () => {
    unit = await house.aPackage(await house.aProduct('cement', { category: 'sterile' }))
    return house.opened(where, unit)
  },
  notImplanted: () => house.opened(where, unit),
  cancel: async () => done(give(await house.call(where, [[unit.product, 1]]), 'accept')),
}
const bodyOf = (name: UndoableCommand): object =>
  ({
    pull: { scan: scanOf(unit) },
    verify: { scan: scanOf(unit), intact: true, secondCheck: house.heard(house.people.scrub, unit.product) },
    notImplanted: { reason: 'sizeChanged' },
  })[name as string] ?? {}

/** What undo must bring back: the item, and its package where it lay. */
const standing = async (call: CallView) => {
  const [row] = await house.rows<{ row: Record<string, unknown> }>(
    'SELECT to_json(i) AS row FROM item i WHERE id = $1',
    [itemOf(call).id],
  )
  const { version: _version, last_step: _step, ...item } = row!.row
  return { item, unit: await house.unitRow(unit.id), open: call.open }
}

describe.each(UNDOABLE)('undo of %s', (name) => {
  test('within two minutes: item and package stand as before, and the log keeps both', async () => {
    const before = await BEFORE[name]()
    const stood = await standing(before)
    const after = await done(give(before, name, bodyOf(name)))
    expect(await standing(after)).not.toEqual(stood)
    house.api.clock.forward(120_000)
    house.api.published.clear()
    const undone = await done(give(after, 'undo'))
    expect(await standing(undone)).toEqual(stood)
    expect(itemOf(undone).version).toBe(itemOf(after).version + 1)
    expect(undone.revision).toBe(after.revision + 1)
    expect(house.api.published.deltas.map(({ call }) => call)).toEqual([undone])
    const log = await house.rows(
      'SELECT type, data FROM event WHERE call_id = $1 ORDER BY seq DESC LIMIT 1',
      [before.id],
    )
    expect(log).toMatchObject([{ type: 'item.undone', data: { command: name } }])
    await house.refused(give(undone, 'undo'), 'nothing-to-undo')
  })

  test('after two minutes there is nothing to undo', async () => {
    const after = await done(give(await BEFORE[name](), name, bodyOf(name)))
    house.api.clock.forward(120_001)
    await house.refused(give(after, 'undo'), 'nothing-to-undo')
  })

  test('somebody else’s step is not undone, by whatever role', async () => {
    const after = await done(give(await BEFORE[name](), name, bodyOf(name)))
    for (const other of [house.people.charge, house.people.core, await house.aPerson('circulator')])
      await house.refused(give(after, 'undo', {}, other), 'nothing-to-undo')
  })

  test('once it is undone the step can be given again', async () => {
    const after = await done(give(await BEFORE[name](), name, bodyOf(name)))
    const undone = await done(give(after, 'undo'))
    await done(give(undone, name, bodyOf(name)))
  })
})

describe('undo, when something has followed', () => {
  test('another’s step: only the last can be taken back', async () => {
    const accepted = await done(give(await house.call(where, [[head, 1]]), 'accept'))
    const pulled = await done(give(accepted, 'pull', { scan: scanOf(unit) }, house.people.core))
    await house.refused(give(pulled, 'undo'), 'nothing-to-undo')
    expect(itemOf(await done(give(pulled, 'undo', {}, house.people.core))).stage).toBe('accepted')
  })

  test('opening: it is not taken back', async () => {
    const call = await house.opened(where, unit)
    await house.refused(give(call, 'undo'), 'nothing-to-undo')
  })

  test('a pull that led straight to the room goes back to where it lay', async () => {
    unit = await house.aPackage(await house.aProduct(), { at: where.room.cart })
    const made = await house.call(where, [[unit.product, 1]])
    const pulled = await done(give(made, 'pull', { scan: scanOf(unit) }))
    const undone = await done(give(pulled, 'undo'))
    expect(itemOf(undone)).toMatchObject({
      stage: 'called',
      acceptedBy: null,
      pulledAt: null,
      inRoomAt: null,
    })
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'held', code: 'OR-1' })
  })

  test.each([
    ['pull', 'called'],
    ['deliver', 'pulled'],
  ] as const)('a recall since then stays, whatever is taken back: %s', async (name, stage) => {
    const before = name === 'pull' ? await house.call(where, [[head, 1]]) : await BEFORE.deliver()
    const after = await done(give(before, name, bodyOf(name)))
    await house.rows(`UPDATE unit SET state = 'recalled' WHERE id = $1`, [unit.id])
    const undone = await done(give(after, 'undo'))
    expect(itemOf(undone).stage).toBe(stage)
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'recalled', held_for: itemOf(undone).id })
  })
})

describe('undo of a cancelled item', () => {
  const cancelled = async (from: 'called' | 'accepted' = 'called') => {
    let call = await house.call(where, [[head, 1]])
    if (from === 'accepted') call = await done(give(call, 'accept'))
    return done(give(call, 'cancel'))
  }

  test('whose package went to somebody else: another is held', async () => {
    const call = await cancelled('accepted')
    const rival = await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]])
    expect(itemOf(rival).unit?.id).toBe(unit.id)
    const other = await house.aPackage(head)
    const undone = await done(give(call, 'undo'))
    expect(itemOf(undone)).toMatchObject({
      stage: 'accepted',
      outcome: null,
      hold: 'held',
      unit: { id: other.id },
    })
    expect(await house.unitRow(unit.id)).toMatchObject({ held_for: itemOf(rival).id })
  })

  test.each(['called', 'accepted'] as const)(
    'when none is left: it waits with none free, also if it was %s',
    async (from) => {
      const call = await cancelled(from)
      const rival = await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]])
      const undone = await done(give(call, 'undo'))
      expect(itemOf(undone)).toMatchObject({
        stage: 'called',
        outcome: null,
        hold: 'noneFree',
        unit: null,
        acceptedBy: null,
        settledAt: null,
      })
      expect(itemOf(undone).heldBy).toEqual([
        { room: { id: rival.room.id, number: rival.room.number }, kind: 'confirmed' },
      ])
      expect(undone.open).toBe(true)
    },
  )

  test.each([`state = 'recalled'`, 'sterile = false', `use_by_on = '2026-11-30'`])(
    'whose package may no longer be used (%s) does not hold it again',
    async (change) => {
      const call = await cancelled()
      await house.rows(`UPDATE unit SET ${change} WHERE id = $1`, [unit.id])
      expect(itemOf(await done(give(call, 'undo')))).toMatchObject({ hold: 'noneFree', unit: null })
      expect(await house.unitRow(unit.id)).toMatchObject({ held_for: null })
    },
  )

  test('that was on its way: the put-back ends, and it is pulled again', async () => {
    const pulled = await done(give(await BEFORE.pull(), 'pull', { scan: scanOf(unit) }))
    const call = await done(give(pulled, 'cancel'))
    const undone = await done(give(call, 'undo'))
    expect(itemOf(undone)).toMatchObject({ stage: 'pulled', outcome: null, putBack: null })
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'pulled', held_for: itemOf(call).id })
  })

  test('that is on the shelf again: too late', async () => {
    const pulled = await done(give(await BEFORE.pull(), 'pull', { scan: scanOf(unit) }))
    const call = await done(give(await done(give(pulled, 'cancel')), 'shelve', {}, house.people.core))
    await house.refused(give(call, 'undo'), 'nothing-to-undo')
  })

  test('that had none free', async () => {
    const made = await house.call(where, [[await house.aProduct(), 1]])
    const undone = await done(give(await done(give(made, 'cancel')), 'undo'))
    expect(itemOf(undone)).toMatchObject({ stage: 'called', outcome: null, hold: 'noneFree' })
  })

  test('of a case that has been closed since: everything had an outcome then', async () => {
    const call = await cancelled()
    await done200(
      house
        .as(house.people.circulator)
        .post(`/cases/${where.id}/commands`, { name: 'signOut', patientOut: true }),
    )
    await house.refused(give(call, 'undo'), 'case-closed')
  })
})

const done200 = async (attempt: ReturnType<TestHouse['onItem']>) => expect((await attempt).status).toBe(200)
