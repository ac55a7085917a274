import type { CallView } from '@bellpull/contracts'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  typedOf,
  type PackageOptions,
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
})

const pull = (call: CallView, body: object, line = 0) =>
  house.onItem(house.people.core, itemOf(call, line), 'pull', body)
/** A package of the product and the call that holds it; what is made first expires first. */
async function called(options: PackageOptions = {}) {
  const unit = await house.aPackage(head, { useByOn: '2027-01-31', ...options })
  return { unit, call: await house.call(where, [[head, 1]]) }
}

describe('pulling the package that is held', () => {
  test.each([
    ['a DataMatrix', (scan: string) => scan],
    ['the bare string of a keyboard scanner', (scan: string) => scan.slice(3)],
    ['GS1-128', (scan: string) => scan.replace(']d2', ']C1')],
  ])('by %s', async (_what, write) => {
    const { unit, call } = await called()
    const pulled = await done(pull(call, { scan: write(scanOf(unit)) }))
    expect(itemOf(pulled)).toMatchObject({
      stage: 'pulled',
      typed: false,
      unit: { id: unit.id, location: { zone: 'hatch' } },
    })
  })

  test('by the text under the barcode, by a link, and by two barcodes in either order', async () => {
    const forms = [
      (lot: string) => `(01)${head.gtin}(17)270131(10)${lot}`,
      (lot: string) => `https://id.example.com/01/${head.gtin}/10/${lot}?17=270131`,
      (lot: string) => [`01${head.gtin}`, `1727013110${lot}`],
      (lot: string) => [`1727013110${lot}`, `01${head.gtin}`],
    ]
    for (const form of forms) {
      const { unit, call } = await called()
      expect(itemOf(await done(pull(call, { scan: form(unit.lot) }))).unit?.id).toBe(unit.id)
    }
  })

  test('by a HIBC label of a maker who labels so', async () => {
    await house.rows(`UPDATE catalogue_item SET hibc_lic = 'A123', hibc_product = 'BJC5D6E7' WHERE id = $1`, [
      head.id,
    ])
    const { unit, call } = await called({ lot: '510X3', useByOn: '2027-01-31' })
    // 2027, day 31 of the year; check characters by the mod-43 rule of HIBC (read back by the label's own tests).
    const reply = await pull(call, { scan: ['+A123BJC5D6E71G', hibcSecondary('G', '$$527031510X3')] })
    expect((reply.body as CallView).items[0]?.unit?.id, JSON.stringify(reply.body)).toBe(unit.id)
  })

  test('typed, whatever the capitals and blanks, and marked so for good', async () => {
    const { unit, call } = await called({ lot: 'LOT 77A' })
    const typed = { ...typedOf(unit), ref: head.ref.toLowerCase(), lot: 'lot77a' }
    const pulled = await done(pull(call, { typed }))
    expect(itemOf(pulled)).toMatchObject({ stage: 'pulled', typed: true, unit: { id: unit.id } })
    const [event] = await house.rows<{ data: object }>(
      `SELECT data FROM event WHERE call_id = $1 AND type = 'item.pulled'`,
      [call.id],
    )
    expect(event?.data).toMatchObject({ typed: true, lot: 'LOT 77A', useByOn: '2027-01-31' })
  })

  test('that stands in the room leads straight to the room', async () => {
    const { unit, call } = await called({ at: where.room.cart })
    const pulled = await done(pull(call, { scan: scanOf(unit) }))
    expect(itemOf(pulled)).toMatchObject({ stage: 'inRoom', unit: { location: { code: 'OR-1' } } })
    expect(itemOf(pulled).pulledAt).toBe(itemOf(pulled).inRoomAt)
    expect(await house.unitRow(unit.id)).toEqual({ state: 'inRoom', held_for: itemOf(call).id, code: 'OR-1' })
    const types = await house.rows<{ type: string }>(
      'SELECT type FROM event WHERE call_id = $1 ORDER BY seq',
      [call.id],
    )
    expect(types.map(({ type }) => type)).toEqual(['call.called', 'item.pulled', 'item.delivered'])
    expect(pulled.revision).toBe(call.revision + 1)
  })
})

describe('pulling another package of the product', () => {
  test('that is free: the hold moves, and the first is free again where it lies', async () => {
    const { unit, call } = await called()
    const other = await house.aPackage(head, { at: house.places.binB })
    house.api.published.clear()
    const pulled = await done(pull(call, { scan: scanOf(other) }))
    expect(itemOf(pulled)).toMatchObject({ stage: 'pulled', unit: { id: other.id, lot: other.lot } })
    expect(await house.unitRow(unit.id)).toEqual({ state: 'available', held_for: null, code: 'A-01' })
    expect(await house.unitRow(other.id)).toEqual({ state: 'pulled', held_for: itemOf(call).id, code: 'H-1' })
    expect(house.api.published.deltas).toHaveLength(1)
    const back = await house.refused(
      house.onItem(house.people.core, itemOf(pulled), 'undo'),
      'nothing-to-undo',
    )
    expect(back['status']).toBe(409)
  })

  test('of the same lot with another serial number', async () => {
    const { call } = await called({ lot: 'SAME', serial: 'S1' })
    const other = await house.aPackage(head, { lot: 'SAME', serial: 'S2', useByOn: '2027-01-31' })
    expect(itemOf(await done(pull(call, { scan: scanOf(other) }))).unit).toMatchObject({
      id: other.id,
      serial: 'S2',
    })
  })

  test('that another room holds on the shelf: the two holds are swapped, both rooms are told, each by its revision', async () => {
    const { unit, call } = await called()
    const other = await house.aPackage(head)
    const elsewhere = await house.aCase({ room: house.rooms[1] })
    const rival = await house.call(elsewhere, [[head, 1]])
    await done(house.onItem(house.people.runner, itemOf(rival), 'accept'))
    const before = await house.board()
    house.api.published.clear()

    const pulled = await done(pull(call, { scan: scanOf(other) }))

    expect(itemOf(pulled)).toMatchObject({ stage: 'pulled', unit: { id: other.id } })
    const board = await house.board()
    const told = board.calls.find(({ id }) => id === rival.id)
    expect(told?.items[0]).toMatchObject({ stage: 'accepted', hold: 'held', unit: { id: unit.id } })
    for (const { id } of [where.room, elsewhere.room])
      expect(board.revisions[id]).toBe((before.revisions[id] ?? 0) + 1)
    expect(house.api.published.deltas).toHaveLength(2)
    for (const delta of house.api.published.deltas)
      expect(delta.call).toEqual(delta.roomId === where.room.id ? pulled : told)
    expect(await house.unitRow(unit.id)).toMatchObject({ state: 'held', held_for: itemOf(rival).id })
    expect(await house.unitRow(other.id)).toMatchObject({ state: 'pulled', held_for: itemOf(call).id })
    // What the other accepted was another package: taking that back would bring a hold to life that is gone.
    await house.refused(house.onItem(house.people.runner, itemOf(told!), 'undo'), 'nothing-to-undo')
  })

  test('that another item of the same call holds: swapped within the call, one revision', async () => {
    const units = [
      await house.aPackage(head, { useByOn: '2027-01-31' }),
      await house.aPackage(head, { useByOn: '2027-02-28' }),
    ]
    const call = await house.call(where, [[head, 2]])
    const pulled = await done(pull(call, { scan: scanOf(units[1]!) }))
    expect(pulled.items.map(({ unit }) => unit?.id)).toEqual([units[1]?.id, units[0]?.id])
    expect(pulled.revision).toBe(call.revision + 1)
  })

  test('that has left the shelf for another room is refused', async () => {
    const { call } = await called()
    const other = await house.aPackage(head)
    const rival = await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]])
    await done(pull(rival, { scan: scanOf(other) }))
    await house.refused(pull(call, { scan: scanOf(other) }), 'unit-held-elsewhere')
  })

  test('that is on its way back to its bin is refused', async () => {
    const { call } = await called()
    const other = await house.aPackage(head, { state: 'putBack' })
    await house.refused(pull(call, { scan: scanOf(other) }), 'unit-held-elsewhere')
  })

  test('that stands in another room is refused, but not its twin of the same lot in the core', async () => {
    const { call } = await called()
    const far = await house.aPackage(head, { at: house.rooms[1].cart, useByOn: '2027-05-31', lot: 'TWIN' })
    await house.refused(pull(call, { scan: scanOf(far) }), 'unit-held-elsewhere')
    const near = await house.aPackage(head, { useByOn: '2027-05-31', lot: 'TWIN' })
    expect(itemOf(await done(pull(call, { scan: scanOf(near) }))).unit?.id).toBe(near.id)
  })

  test('when the one that is held cannot stand in for it, as it lies in this room', async () => {
    const { call } = await called({ at: where.room.cart })
    const other = await house.aPackage(head)
    await house.call(await house.aCase({ room: house.rooms[1] }), [[head, 1]])
    await house.refused(pull(call, { scan: scanOf(other) }), 'unit-held-elsewhere')
  })

  test.each(['recalled', 'quarantined'])('the one that was held and has been %s stays so', async (state) => {
    const { unit, call } = await called()
    await house.rows('UPDATE unit SET state = $2 WHERE id = $1', [unit.id, state])
    const other = await house.aPackage(head)
    await done(pull(call, { scan: scanOf(other) }))
    expect(await house.unitRow(unit.id)).toMatchObject({ state, held_for: null })
  })
})

describe('a label that will not do', () => {
  test.each([
    [
      'check-digit',
      (gtin: string) => `01${gtin.slice(0, 13)}${(Number(gtin[13]) + 1) % 10}17270131` + '10L1',
    ],
    ['no-such-date', (gtin: string) => `01${gtin}1727023110L1`],
    ['lot-too-long', (gtin: string) => `01${gtin}10${'X'.repeat(21)}`],
    ['unknown-ai', (gtin: string) => `01${gtin}05123`],
    ['no-product', () => '1727013110L1'],
    ['no-lot', (gtin: string) => `01${gtin}`],
  ])('is unreadable, and why: %s', async (reason, write) => {
    const { call } = await called()
    const body = await house.refused(pull(call, { scan: write(head.gtin) }), 'label-unreadable', 422)
    expect(body['reason']).toBe(reason)
    expect(body['detail']).toEqual(expect.any(String))
  })

  test('is missing', async () => {
    const { call } = await called()
    const body = await house.refused(pull(call, {}), 'invalid-input', 422)
    expect(body['errors']).toMatchObject([{ pointer: '/scan' }])
  })

  test('is of another size: both are named', async () => {
    const { call } = await called()
    const unit = await house.aPackage(await house.aProduct('head', { size: '52', variant: 'eccentric' }))
    const body = await house.refused(pull(call, { scan: scanOf(unit) }), 'wrong-item')
    expect(body).toMatchObject({
      detail: 'Called: head 50. On the label: head 52 eccentric.',
      expected: { ref: head.ref, label: 'head 50' },
      scanned: { ref: unit.product.ref, label: 'head 52', variant: 'eccentric' },
    })
  })

  test('is of a product that the house does not know', async () => {
    const { unit, call } = await called()
    const scan = scanOf(unit).replace(head.gtin, '09506000134352')
    const body = await house.refused(pull(call, { scan }), 'wrong-item')
    expect(body).toMatchObject({ expected: { ref: head.ref }, scanned: { gtin: '09506000134352' } })
  })

  test('is for the other side', async () => {
    const [left, right] = [
      await house.aProduct('femur', { side: 'left' }),
      await house.aProduct('femur', { side: 'right' }),
    ]
    await house.aPackage(left)
    const unit = await house.aPackage(right)
    const body = await house.refused(
      pull(await house.call(where, [[left, 1]]), { scan: scanOf(unit) }),
      'wrong-side',
    )
    expect(body).toMatchObject({ expected: { side: 'left' }, scanned: { side: 'right' } })
  })

  test('bears another date than the record; both are shown', async () => {
    const { unit, call } = await called()
    const body = await house.refused(
      pull(call, { scan: scanOf(unit, { useByOn: '2029-01-31' }) }),
      'label-differs',
    )
    expect(body).toMatchObject({ expected: { useByOn: '2027-01-31' }, scanned: { useByOn: '2029-01-31' } })
    await house.refused(pull(call, { typed: { ...typedOf(unit), useByOn: '2029-01-31' } }), 'label-differs')
  })

  test('bears a lot or a serial number that the house does not have', async () => {
    const { unit, call } = await called({ serial: 'S1' })
    await house.refused(pull(call, { scan: scanOf(unit, { lot: 'NEVER' }) }), 'unit-not-in-stock')
    await house.refused(pull(call, { scan: scanOf(unit, { serial: 'S9' }) }), 'unit-not-in-stock')
  })

  test('has nothing to be compared with: what was called in words is not pulled', async () => {
    const call = await house.call(where, ['Stool'])
    await house.refused(pull(call, { scan: `01${head.gtin}` }), 'item-moved-on')
  })
})

describe('a package that may not be used is not pulled', () => {
  test.each([
    ['unit-expired', `use_by_on = '2026-11-30'`, { useByOn: '2026-11-30' }],
    ['unit-quarantined', `state = 'quarantined'`, {}],
    ['unit-recalled', `state = 'recalled'`, {}],
    ['unit-not-sterile', `sterile = false`, {}],
  ])('%s: neither the one that is held nor another', async (code, change, label) => {
    const { unit, call } = await called()
    const other = await house.aPackage(head)
    await house.rows(`UPDATE unit SET ${change} WHERE id = ANY($1)`, [[unit.id, other.id]])
    await house.refused(pull(call, { scan: scanOf(unit, label) }), code)
    await house.refused(pull(call, { scan: scanOf(other, label) }), code)
  })

  test.each(['implanted', 'used', 'notImplanted', 'shippedBack', 'writtenOff'])(
    'unit-not-in-stock: %s',
    async (state) => {
      const { call } = await called()
      const gone = await house.aPackage(head, { state })
      await house.refused(pull(call, { scan: scanOf(gone) }), 'unit-not-in-stock')
    },
  )

  test('the use-by day itself is usable, and a date that passed at midnight is not', async () => {
    const { unit, call } = await called({ useByOn: house.api.clock.today() })
    const next = await called({ useByOn: house.api.clock.today() })
    await done(pull(call, { scan: scanOf(unit) }))
    house.api.clock.forward(24 * 3_600_000)
    const body = await house.refused(pull(next.call, { scan: scanOf(next.unit) }), 'unit-expired')
    expect(body).toMatchObject({ useByOn: next.unit.useByOn, today: house.api.clock.today() })
  })
})

/** A secondary HIBC barcode with its link character and its check character. */
function hibcSecondary(link: string, data: string): string {
  const table = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ-. $/+%'
  const text = `+${data}${link}`
  const sum = [...text].reduce((total, character) => total + table.indexOf(character), 0)
  return text + table[sum % 43]
}
