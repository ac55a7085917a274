import type { CallView } from '@bellpull/contracts'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { done, itemOf, openHouse, type Line, type TestCase, type TestHouse } from '../../../test/house.js'

let house: TestHouse
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(() => house.newTest())

const DAY_MS = 86_400_000

/** The same call made the careful way: a key of the day before yesterday is taken, so the one statement gives up. */
async function carefully(
  where: TestCase,
  lines: readonly Line[],
  options: { inMinutes?: number } = {},
): Promise<CallView> {
  const key = crypto.randomUUID()
  await house.rows(
    `INSERT INTO idempotency_key (person_id, key, method, path, request_hash, status, answer, created_at)
     VALUES ($1, $2, 'POST', $3, '', 201, '{"old": true}', $4)`,
    [
      house.people.circulator.id,
      key,
      `/api/v1/cases/${where.id}/calls`,
      new Date(house.api.clock.now().getTime() - 2 * DAY_MS),
    ],
  )
  return house.call(where, lines, { ...options, key })
}

/** A call without what must differ between two of them: ids, and how often the room has changed. */
function shapeOf(call: CallView): unknown {
  const names = new Map<string, string>()
  for (const [n, item] of call.items.entries())
    names.set(item.id, `item ${n}`).set(item.unit?.id ?? '', `package ${n}`)
  names.set(call.id, 'call')
  const text = JSON.stringify({ ...call, revision: 0 })
  return JSON.parse(text.replace(/[0-9a-f-]{36}/g, (id) => names.get(id) ?? id))
}

describe('a call where all is in order', () => {
  test('holds a package for every item and is told once, whole, as one revision', async () => {
    const where = await house.aCase()
    const [head, stem] = [
      await house.aProduct('head', { variant: 'concentric' }),
      await house.aProduct('stem'),
    ]
    const unit = await house.aPackage(head, { serial: 'S1' })
    await house.aPackage(stem)
    const before = (await house.board()).revisions[where.room.id] ?? 0

    const made = await house.call(where, [
      [head, 1],
      [stem, 1],
    ])

    const now = house.api.clock.now()
    const { surgeon, circulator } = house.people
    const ref = ({ id, initials, name, role }: typeof surgeon) => ({ id, initials, name, role })
    expect(made).toMatchObject({
      caseId: where.id,
      room: { id: where.room.id, number: where.room.number },
      kind: 'confirmed',
      neededAt: new Date(now.getTime() + 600_000).toISOString(),
      calledAt: now.toISOString(),
      confirmedAt: now.toISOString(),
      calledBy: ref(surgeon),
      enteredBy: ref(circulator),
      readBack: null,
      version: 1,
      revision: before + 1,
      side: 'left',
      open: true,
    })
    expect(itemOf(made)).toMatchObject({
      callId: made.id,
      catalogueItemId: head.id,
      category: 'implant',
      ref: head.ref,
      variant: 'concentric',
      side: 'either',
      stage: 'called',
      outcome: null,
      hold: 'held',
      unit: { id: unit.id, gtin: head.gtin, lot: unit.lot, serial: 'S1', useByOn: unit.useByOn },
      alternatives: [],
      heldBy: [],
      pairs: [{ itemId: itemOf(made, 1).id, result: 'notChecked' }],
      acceptedBy: null,
      version: 1,
    })
    expect(itemOf(made).unit?.location).toEqual({ id: house.places.binA, code: 'A-01', zone: 'core' })
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'held', held_for: itemOf(made).id })
    expect(house.api.published.deltas).toEqual([
      { roomId: where.room.id, revision: before + 1, event: 'call.called', call: made },
    ])
    expect(house.api.published.stock.flat().sort()).toEqual([head.id, stem.id].sort())
    expect((await house.board()).calls.find(({ id }) => id === made.id)).toEqual(made)
    expect((await house.board()).revisions[where.room.id]).toBe(before + 1)
  })

  test.each([
    ['now', 0],
    ['in ten minutes', 10],
  ])(
    'wanted %s, made at once or carefully, looks the same to everybody and is stored the same',
    async (_what, inMinutes) => {
      const where = await house.aCase()
      const shapes: unknown[] = []
      const logged: unknown[] = []
      const [head, stem, cement] = [
        await house.aProduct('head', { variant: 'eccentric' }),
        await house.aProduct('stem'),
        await house.aProduct('cement', { category: 'sterile' }),
      ]
      const lines: Line[] = [
        [head, 2],
        [cement, 1],
        [stem, 1],
      ]
      for (const make of [house.call, carefully]) {
        // The same packages again, under new ids.
        await house.rows('UPDATE unit SET state = $1, held_for = NULL WHERE catalogue_item_id = ANY($2)', [
          'writtenOff',
          [head.id, stem.id, cement.id],
        ])
        await house.rows(
          `UPDATE item SET outcome = 'cancelled', settled_at = now(), unit_id = NULL WHERE outcome IS NULL`,
        )
        for (const [product, lot, at] of [
          [head, 'H1', house.places.binB],
          [head, 'H2', where.room.cart],
          [head, 'H3', house.places.binA],
          [stem, 'S1', house.places.binA],
          [cement, 'C1', house.places.binB],
        ] as const)
          await house.aPackage(product, { lot, at })
        house.api.published.clear()
        const made = await make(where, lines, { inMinutes })
        expect((await house.board()).calls.find(({ id }) => id === made.id)).toEqual(made)
        expect(house.api.published.deltas.map(({ call }) => call)).toEqual([made])
        expect(house.api.published.stock.flat().sort()).toEqual([head.id, stem.id, cement.id].sort())
        shapes.push(shapeOf(made))
        const [event] = await house.rows<{ data: { items: object[] } }>(
          'SELECT type, data FROM event WHERE call_id = $1',
          [made.id],
        )
        logged.push({
          keys: Object.keys(event?.data ?? {}).sort(),
          items: event?.data.items.map((one) => Object.keys(one).sort()),
        })
      }
      expect(shapes[1]).toEqual(shapes[0])
      expect(logged[1]).toEqual(logged[0])
    },
  )

  test('a line of quantity n makes n items, each with a package of its own, in the order of the lines', async () => {
    const where = await house.aCase()
    const [head, stem] = [await house.aProduct('head'), await house.aProduct('stem')]
    for (let n = 0; n < 9; n += 1) await house.aPackage(head)
    await house.aPackage(stem)
    const made = await house.call(where, [
      [stem, 1],
      [head, 9],
    ])
    expect(made.items.map(({ catalogueItemId }) => catalogueItemId)).toEqual([
      stem.id,
      ...Array<string>(9).fill(head.id),
    ])
    expect(new Set(made.items.map(({ unit }) => unit?.id)).size).toBe(10)
    expect(made.items.every(({ hold }) => hold === 'held')).toBe(true)
  })

  test('the same product on two lines is two items', async () => {
    const where = await house.aCase()
    const head = await house.aProduct()
    await house.aPackage(head)
    await house.aPackage(head)
    const made = await house.call(where, [
      [head, 1],
      [head, 1],
    ])
    expect(new Set(made.items.map(({ unit }) => unit?.id)).size).toBe(2)
  })

  test('stand by has no time, early is not confirmed, and both hold a package', async () => {
    const where = await house.aCase({ status: 'planned' })
    const head = await house.aProduct()
    await house.aPackage(head)
    await house.aPackage(head)
    const standby = await house.call(where, [[head, 1]], { kind: 'standby' })
    expect(standby).toMatchObject({
      kind: 'standby',
      neededAt: null,
      confirmedAt: null,
      items: [{ hold: 'held' }],
    })
    const early = await house.call(where, [[head, 1]], { kind: 'early', inMinutes: 30 })
    expect(early).toMatchObject({ kind: 'early', confirmedAt: null, items: [{ hold: 'held' }] })
  })

  test('a scrub person of the team may be the one who calls, and the surgeon may enter it alone', async () => {
    const where = await house.aCase()
    const head = await house.aProduct()
    await house.aPackage(head)
    await house.aPackage(head)
    const { scrub, surgeon } = house.people
    expect((await house.call(where, [[head, 1]], { calledBy: scrub, by: scrub })).calledBy.id).toBe(scrub.id)
    expect((await house.call(where, [[head, 1]], { by: surgeon })).enteredBy.id).toBe(surgeon.id)
  })
})

describe('what is not kept by package', () => {
  test('words are an item of their own without a package, beside one that has one', async () => {
    const where = await house.aCase()
    const head = await house.aProduct()
    await house.aPackage(head)
    const made = await house.call(where, ['Drill bit 2.5 mm', [head, 1]])
    expect(made.items).toMatchObject([
      {
        category: 'other',
        label: 'Drill bit 2.5 mm',
        catalogueItemId: null,
        ref: '',
        hold: 'notStocked',
        unit: null,
        kind: 'other',
        side: 'either',
      },
      { category: 'implant', hold: 'held' },
    ])
    expect((await house.board()).calls.find(({ id }) => id === made.id)).toEqual(made)
  })

  test('what the house does not stock by package is called without a hold', async () => {
    const where = await house.aCase()
    const drill = await house.aProduct('other', { category: 'sterile', stocked: false })
    const made = await house.call(where, [[drill, 2]])
    expect(made.items).toMatchObject([
      { hold: 'notStocked', unit: null },
      { hold: 'notStocked', alternatives: [] },
    ])
  })
})

describe('none free', () => {
  test('the call is still made: the nearest sizes are shown as facts, and who holds the package', async () => {
    const systemId = await house.aSystem()
    const size = (mm: string, variant: string | null = null, kind: 'head' | 'stem' = 'head') =>
      house.aProduct(kind, { size: mm, variant, systemId })
    const [h50, h48, h52, h54, h56, eccentric, stem, empty] = [
      await size('50'),
      await size('48'),
      await size('52'),
      await size('54'),
      await size('56'),
      await size('50', 'eccentric'),
      await size('50', null, 'stem'),
      await size('49'),
    ]
    const foreign = await house.aProduct('head', { size: '50' })
    const [mine, other] = [await house.aCase(), await house.aCase({ room: house.rooms[1] })]
    for (const product of [h48, h48, h52, h54, h56, eccentric, stem, foreign, h50])
      await house.aPackage(product)
    await house.aPackage(h52, { at: mine.room.cart })
    await house.aPackage(h48, { at: other.room.cart })
    await house.aPackage(empty, { useByOn: '2026-11-30' })
    const rival = await house.call(other, [[h50, 1]], { kind: 'early', inMinutes: 20 })
    house.api.published.clear()

    const made = await house.call(mine, [[h50, 1]], { kind: 'early', inMinutes: 5 })

    expect(itemOf(made)).toMatchObject({ hold: 'noneFree', unit: null, stage: 'called', outcome: null })
    expect(itemOf(made).alternatives).toEqual([
      { catalogueItemId: eccentric.id, label: 'head 50 eccentric', inRoom: 0, inCore: 1 },
      { catalogueItemId: h48.id, label: 'head 48', inRoom: 0, inCore: 2 },
      { catalogueItemId: h52.id, label: 'head 52', inRoom: 1, inCore: 1 },
      { catalogueItemId: h54.id, label: 'head 54', inRoom: 0, inCore: 1 },
    ])
    expect(itemOf(made).heldBy).toEqual([
      { room: { id: rival.room.id, number: rival.room.number }, kind: 'early' },
    ])
    expect(house.api.published.deltas.map(({ call }) => call)).toEqual([made])
    expect((await house.board()).calls.find(({ id }) => id === made.id)).toEqual(made)
  })

  test('held by the own room is shown too, and there may be no alternative', async () => {
    const where = await house.aCase()
    const head = await house.aProduct('head', { systemId: await house.aSystem() })
    await house.aPackage(head)
    const made = await house.call(where, [[head, 2]])
    expect(made.items.map(({ hold }) => hold)).toEqual(['held', 'noneFree'])
    expect(itemOf(made, 1)).toMatchObject({
      alternatives: [],
      heldBy: [{ room: { id: where.room.id, number: where.room.number }, kind: 'confirmed' }],
    })
  })

  test('a part of the other side is no alternative', async () => {
    const systemId = await house.aSystem()
    const left = await house.aProduct('femur', { size: '5', side: 'left', systemId })
    const right = await house.aProduct('femur', { size: '6', side: 'right', systemId })
    await house.aPackage(right)
    const made = await house.call(await house.aCase(), [[left, 1]])
    expect(itemOf(made)).toMatchObject({ hold: 'noneFree', alternatives: [] })
  })

  test.each([
    ['expired yesterday', { useByOn: '2026-11-30' }],
    ['not sterile', { sterile: false }],
    ['quarantined', { state: 'quarantined' }],
    ['recalled', { state: 'recalled' }],
    ['on its way back', { state: 'putBack' }],
    ['in another room', { at: 'another room' }],
  ])('a package that is %s is never held', async (_what, options) => {
    const head = await house.aProduct()
    const at = 'at' in options ? { at: house.rooms[1].cart } : {}
    const unit = await house.aPackage(head, { ...options, ...at })
    const before = await house.unitRow(unit.id)
    for (const text of [[], ['Stool']]) {
      const made = await house.call(await house.aCase(), [[head, 1], ...text], { inMinutes: 0 })
      expect(itemOf(made)).toMatchObject({ hold: 'noneFree', unit: null })
    }
    expect(await house.unitRow(unit.id)).toEqual(before)
  })

  test('the use-by day itself is usable', async () => {
    const head = await house.aProduct()
    await house.aPackage(head, { useByOn: house.api.clock.today() })
    expect(itemOf(await house.call(await house.aCase(), [[head, 1]])).hold).toBe('held')
  })
})

describe('a confirmed call and an early hold', () => {
  test('takes the package of the early call that needs it last; both rooms are told, each by its own revision', async () => {
    const head = await house.aProduct()
    const units = [await house.aPackage(head), await house.aPackage(head)]
    const [soon, late] = [
      await house.aCase({ room: house.rooms[1] }),
      await house.aCase({ room: house.rooms[2] }),
    ]
    await house.call(soon, [[head, 1]], { kind: 'early', inMinutes: 20 })
    const losing = await house.call(late, [[head, 1]], { kind: 'early', inMinutes: 90 })
    await done(house.onCall(house.people.runner, losing, 'accept'))
    house.api.published.clear()

    const mine = await house.aCase()
    const made = await house.call(mine, [[head, 1]], { inMinutes: 0 })

    const taken = itemOf(losing).unit?.id
    expect(units.map(({ id }) => id)).toContain(taken)
    expect(itemOf(made)).toMatchObject({ hold: 'held', unit: { id: taken } })
    const board = await house.board()
    const lost = board.calls.find(({ id }) => id === losing.id)
    expect(lost?.items[0]).toMatchObject({ hold: 'noneFree', unit: null, stage: 'called', acceptedBy: null })
    expect(house.api.published.deltas.map(({ roomId, event }) => ({ roomId, event })).sort(byRoom)).toEqual(
      [
        { roomId: late.room.id, event: 'item.holdLost' },
        { roomId: mine.room.id, event: 'call.called' },
      ].sort(byRoom),
    )
    for (const delta of house.api.published.deltas) {
      expect(delta.call).toEqual(
        board.calls.find(({ revision, room }) => room.id === delta.roomId && revision === delta.revision),
      )
      expect(delta.revision).toBe(board.revisions[delta.roomId])
    }
    expect(house.api.published.notices).toContainEqual(
      expect.objectContaining({
        kind: 'hold.taken',
        roomId: late.room.id,
        toRoomId: mine.room.id,
        heldAgain: false,
      }),
    )
  })

  test.each(['early', 'standby'] as const)('a call that is %s takes nothing from anybody', async (kind) => {
    const head = await house.aProduct()
    await house.aPackage(head)
    const first = await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]], {
      kind: 'early',
    })
    const second = await house.call(await house.aCase(), [[head, 1]], { kind })
    expect(itemOf(second).hold).toBe('noneFree')
    expect((await house.board()).calls.find(({ id }) => id === first.id)?.version).toBe(1)
  })

  test.each(['confirmed', 'standby'] as const)('nothing is taken from a call that is %s', async (kind) => {
    const head = await house.aProduct()
    await house.aPackage(head)
    await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]], { kind })
    expect(itemOf(await house.call(await house.aCase(), [[head, 1]])).hold).toBe('noneFree')
  })
})

const byRoom = (a: { roomId: string }, b: { roomId: string }) => a.roomId.localeCompare(b.roomId)
