import type { CallView, EventView } from '@bellpull/contracts'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  type Package,
  type Person,
  type TestCase,
  type TestHouse,
} from '../../../test/house.js'

let house: TestHouse
let where: TestCase
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(async () => {
  house.newTest()
  where = await house.aCase()
})

interface Step {
  readonly who: keyof TestHouse['people']
  readonly name: string
  readonly body?: object
  /** What the item shows afterwards. */
  readonly item: object
  readonly event: string
  /** State and place of the package afterwards. */
  readonly unit?: readonly [state: string, place: string]
}

const eventsOf = async (call: CallView): Promise<EventView[]> =>
  (
    (await house.as(house.people.scrub).get(`/events?call=${call.id}`).expect(200)).body as {
      items: EventView[]
    }
  ).items

/** Gives the commands one after the other; each is one revision, one event, told whole, and seen on the board. */
async function walk(from: CallView, steps: readonly Step[], unit?: Package): Promise<CallView> {
  let call = from
  for (const step of steps) {
    house.api.clock.forward(1_000)
    house.api.published.clear()
    const who: Person = house.people[step.who]
    const before = call
    call = await done(house.onItem(who, itemOf(call), step.name, step.body))
    expect(itemOf(call), step.name).toMatchObject({ ...step.item, version: itemOf(before).version + 1 })
    expect([call.version, call.revision]).toEqual([before.version + 1, before.revision + 1])
    expect(house.api.published.deltas).toEqual([
      { roomId: where.room.id, revision: call.revision, event: step.event, call },
    ])
    const shown = (await house.board()).calls.find(({ id }) => id === call.id)
    expect(shown).toEqual(call.open ? call : undefined)
    const last = (await eventsOf(call)).at(-1)
    expect(last).toMatchObject({
      type: step.event,
      at: house.api.clock.now().toISOString(),
      itemId: itemOf(call).id,
      callId: call.id,
      caseId: where.id,
      roomId: where.room.id,
      actor: { id: who.id, initials: who.initials },
    })
    if (unit && step.unit) {
      const row = await house.unitRow(unit.id)
      expect([row.state, row.code], step.name).toEqual(step.unit)
    }
  }
  return call
}

const at = (call: CallView) => house.api.clock.now().toISOString() >= call.calledAt

describe('from called to its end', () => {
  test('an implant: fetched, delivered, verified by two, opened, implanted', async () => {
    const unit = await house.aPackage(await house.aProduct('stem', { size: '9' }))
    const made = await house.readBack(await house.call(where, [[unit.product, 1]]))
    const scan = scanOf(unit)
    const verify = { scan, intact: true, secondCheck: house.pin(house.people.scrub) }
    const { runner } = house.people
    const call = await walk(
      made,
      [
        {
          who: 'runner',
          name: 'accept',
          item: { stage: 'accepted', acceptedBy: { id: runner.id } },
          event: 'item.accepted',
          unit: ['held', 'A-01'],
        },
        {
          who: 'core',
          name: 'pull',
          body: { scan },
          item: { stage: 'pulled', acceptedBy: { id: runner.id }, typed: false },
          event: 'item.pulled',
          unit: ['pulled', 'H-1'],
        },
        {
          who: 'runner',
          name: 'deliver',
          item: { stage: 'inRoom' },
          event: 'item.delivered',
          unit: ['inRoom', 'OR-1'],
        },
        {
          who: 'circulator',
          name: 'verify',
          body: verify,
          item: { stage: 'verified' },
          event: 'item.verified',
          unit: ['inRoom', 'OR-1'],
        },
        {
          who: 'circulator',
          name: 'open',
          item: { stage: 'opened', openedUnverified: false },
          event: 'item.opened',
          unit: ['opened', 'OR-1'],
        },
        {
          who: 'scrub',
          name: 'implant',
          item: { stage: 'opened', outcome: 'implanted' },
          event: 'item.implanted',
          unit: ['implanted', 'OR-1'],
        },
      ],
      unit,
    )
    const item = itemOf(call)
    const times = [
      item.acceptedAt,
      item.pulledAt,
      item.inRoomAt,
      item.verifiedAt,
      item.openedAt,
      item.settledAt,
    ]
    expect(times).toEqual([...times].sort())
    expect(new Set(times).size).toBe(6)
    expect(at(call)).toBe(true)
    expect(call.open).toBe(false)
    expect((await house.unitRow(unit.id)).held_for).toBeNull()
    expect((await eventsOf(call)).map(({ type }) => type)).toEqual([
      'call.called',
      'call.readBack',
      'item.accepted',
      'item.pulled',
      'item.delivered',
      'item.verified',
      'item.opened',
      'item.implanted',
    ])
    const moves = await house.rows<{ why: string; from: string; to: string; to_state: string }>(
      `SELECT m.why, f.code AS from, t.code AS to, m.to_state FROM movement m JOIN location f ON f.id = m.from_location_id
         JOIN location t ON t.id = m.to_location_id WHERE m.unit_id = $1 ORDER BY m.id`,
      [unit.id],
    )
    expect(moves).toEqual([
      { why: 'pulled', from: 'A-01', to: 'H-1', to_state: 'pulled' },
      { why: 'delivered', from: 'H-1', to: 'OR-1', to_state: 'inRoom' },
    ])
  })

  test('cement: one person verifies it, and it is used; accepted and pulled in one', async () => {
    const unit = await house.aPackage(await house.aProduct('cement', { category: 'sterile' }))
    const made = await house.readBack(await house.call(where, [[unit.product, 1]]))
    const scan = scanOf(unit)
    const { core } = house.people
    const call = await walk(
      made,
      [
        {
          who: 'core',
          name: 'pull',
          body: { scan },
          item: { stage: 'pulled', acceptedBy: { id: core.id } },
          event: 'item.pulled',
          unit: ['pulled', 'H-1'],
        },
        { who: 'circulator', name: 'deliver', item: { stage: 'inRoom' }, event: 'item.delivered' },
        {
          who: 'charge',
          name: 'verify',
          body: { scan, intact: true },
          item: { stage: 'verified' },
          event: 'item.verified',
        },
        { who: 'circulator', name: 'open', item: { stage: 'opened' }, event: 'item.opened' },
        {
          who: 'circulator',
          name: 'use',
          item: { outcome: 'used' },
          event: 'item.used',
          unit: ['used', 'OR-1'],
        },
      ],
      unit,
    )
    expect(call.open).toBe(false)
    expect((await eventsOf(call)).find(({ type }) => type === 'item.verified')?.data).toMatchObject({
      checkedBy: null,
      lot: unit.lot,
    })
  })

  test('opened and not implanted, with a reason from the list and a word of one’s own', async () => {
    const unit = await house.aPackage(await house.aProduct())
    const opened = await house.opened(where, unit)
    const body = { reason: 'contaminated', note: 'Touched the drape' }
    const call = await walk(
      opened,
      [
        {
          who: 'scrub',
          name: 'notImplanted',
          body,
          item: { outcome: 'notImplanted', reason: 'contaminated: Touched the drape' },
          event: 'item.notImplanted',
          unit: ['notImplanted', 'OR-1'],
        },
      ],
      unit,
    )
    expect(call.open).toBe(false)
  })

  test('words: brought by whoever accepts, used in the room, no package anywhere', async () => {
    const made = await house.call(where, ['Stool'])
    const call = await walk(made, [
      { who: 'runner', name: 'accept', item: { stage: 'accepted', unit: null }, event: 'item.accepted' },
      { who: 'runner', name: 'deliver', item: { stage: 'inRoom' }, event: 'item.delivered' },
      { who: 'scrub', name: 'use', item: { stage: 'inRoom', outcome: 'used' }, event: 'item.used' },
    ])
    expect(call.open).toBe(false)
  })

  test('words: brought without a word of acceptance, and put back with nothing to shelve', async () => {
    const { runner } = house.people
    const call = await walk(await house.call(where, ['Stool']), [
      {
        who: 'runner',
        name: 'deliver',
        item: { stage: 'inRoom', acceptedBy: { id: runner.id } },
        event: 'item.delivered',
      },
      {
        who: 'circulator',
        name: 'putBack',
        item: { outcome: 'returned', putBack: null },
        event: 'item.returned',
      },
    ])
    expect(call.open).toBe(false)
  })

  test('what is not kept by package is pulled without a scan, and verified by its label and date', async () => {
    const drill = await house.aProduct('other', { category: 'sterile', stocked: false })
    const made = await house.readBack(await house.call(where, [[drill, 1]]))
    const label = { product: drill, lot: 'X1', useByOn: '2027-01-31', serial: null }
    const call = await walk(made, [
      {
        who: 'core',
        name: 'pull',
        item: { stage: 'pulled', unit: null, hold: 'notStocked' },
        event: 'item.pulled',
      },
      { who: 'runner', name: 'deliver', item: { stage: 'inRoom' }, event: 'item.delivered' },
    ])
    const verify = (useByOn: string) => ({ scan: scanOf(label, { useByOn }), intact: true })
    const { circulator } = house.people
    await house.refused(
      house.onItem(circulator, itemOf(call), 'verify', verify('2026-11-30')),
      'unit-expired',
    )
    await walk(call, [
      {
        who: 'circulator',
        name: 'verify',
        body: verify('2026-12-01'),
        item: { stage: 'verified' },
        event: 'item.verified',
      },
      { who: 'circulator', name: 'open', item: { stage: 'opened' }, event: 'item.opened' },
      { who: 'scrub', name: 'use', item: { outcome: 'used' }, event: 'item.used' },
    ])
  })
})

describe('accepting', () => {
  test('what has no package cannot be accepted or pulled', async () => {
    const made = await house.call(where, [[await house.aProduct(), 1]])
    await house.refused(house.onItem(house.people.runner, itemOf(made), 'accept'), 'none-free')
    await house.refused(house.onItem(house.people.runner, itemOf(made), 'pull', { scan: 'x' }), 'none-free')
    await house.refused(house.onCall(house.people.runner, made, 'accept'), 'none-free')
  })

  test('a whole call: everything that has a package, in one revision', async () => {
    const unit = await house.aPackage(await house.aProduct())
    const made = await house.call(where, [[unit.product, 2], 'Stool'])
    house.api.published.clear()
    const call = await done(house.onCall(house.people.runner, made, 'accept'))
    expect(call.items.map(({ stage }) => stage)).toEqual(['accepted', 'called', 'accepted'])
    expect([call.version, call.revision]).toEqual([made.version + 1, made.revision + 1])
    expect(house.api.published.deltas.map(({ call: told }) => told)).toEqual([call])
    expect((await eventsOf(call)).map(({ type }) => type)).toEqual([
      'call.called',
      'item.accepted',
      'item.accepted',
    ])
    await house.refused(house.onCall(house.people.core, call, 'accept'), 'none-free')
  })

  test('given back by who has it, and by nobody else', async () => {
    const unit = await house.aPackage(await house.aProduct())
    const { runner, core } = house.people
    const made = await house.call(where, [[unit.product, 1]])
    const accepted = await done(house.onItem(runner, itemOf(made), 'accept'))
    await house.refused(house.onItem(core, itemOf(accepted), 'decline'), 'not-permitted', 403)
    const back = await done(house.onItem(runner, itemOf(accepted), 'decline'))
    expect(itemOf(back)).toMatchObject({ stage: 'called', acceptedBy: null, acceptedAt: null, hold: 'held' })
    expect((await eventsOf(back)).at(-1)?.type).toBe('item.declined')
  })

  test('taken over: the other is told; one’s own cannot be', async () => {
    const unit = await house.aPackage(await house.aProduct())
    const { runner, core } = house.people
    const accepted = await done(
      house.onItem(runner, itemOf(await house.call(where, [[unit.product, 1]])), 'accept'),
    )
    await house.refused(house.onItem(runner, itemOf(accepted), 'takeOver'), 'item-moved-on')
    const taken = await done(house.onItem(core, itemOf(accepted), 'takeOver'))
    expect(itemOf(taken)).toMatchObject({ stage: 'accepted', acceptedBy: { id: core.id } })
    expect(house.api.published.notices).toEqual([
      expect.objectContaining({ kind: 'item.takenOver', personId: runner.id, itemId: itemOf(taken).id }),
    ])
    expect((await eventsOf(taken)).at(-1)).toMatchObject({
      type: 'item.takenOver',
      data: { fromPersonId: runner.id },
    })
    await house.refused(house.onItem(runner, itemOf(taken), 'undo'), 'nothing-to-undo')
  })
})

describe('reading back', () => {
  test('sets who and when, once; by anybody but the one who called', async () => {
    const unit = await house.aPackage(await house.aProduct())
    const { scrub, circulator } = house.people
    const made = await house.call(where, [[unit.product, 1]], { by: scrub, calledBy: scrub })
    await house.refused(house.onCall(scrub, made, 'readBack'), 'own-call')
    const read = await done(house.onCall(circulator, made, 'readBack'))
    expect(read.readBack).toMatchObject({
      by: { id: circulator.id },
      at: house.api.clock.now().toISOString(),
    })
    expect(read.version).toBe(made.version + 1)
    expect((await eventsOf(read)).at(-1)?.type).toBe('call.readBack')
    await house.refused(house.onCall(house.people.charge, read, 'readBack'), 'call-moved-on')
  })

  test('by who only entered it on the surgeon’s word', async () => {
    const unit = await house.aPackage(await house.aProduct())
    const { scrub, surgeon } = house.people
    const made = await house.call(where, [[unit.product, 1]], { by: scrub, calledBy: surgeon })
    expect((await done(house.onCall(scrub, made, 'readBack'))).readBack?.by.id).toBe(scrub.id)
  })
})
