import type { CallView } from '@bellpull/contracts'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { TEST_PIN } from '../../../test/app.js'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  typedOf,
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
  // Wrong PINs are counted whatever follows; none of the test before is held against this one.
  await house.rows('DELETE FROM sign_in_failure')
})

const pinOf = (checker: Person = house.people.scrub, value = TEST_PIN) => ({
  secondCheck: house.pin(checker, value),
})
const spoken = (size: unknown, side: string, checker: Person = house.people.scrub) => ({
  secondCheck: { method: 'spoken', checkerId: checker.id, heard: { size, side } },
})
const verify = (call: CallView, body: object, who: Person = house.people.circulator) =>
  house.onItem(who, itemOf(call), 'verify', { intact: true, ...body })

async function brought(
  kind: 'head' | 'femur' = 'head',
  over: { side?: 'left'; size?: string; serial?: string } = {},
) {
  const unit = await house.aPackage(
    await house.aProduct(kind, over),
    over.serial === undefined ? {} : { serial: over.serial },
  )
  return { unit, call: await house.broughtIn(where, [unit]), scan: scanOf(unit) }
}

describe('two people verify', () => {
  test.each(['surgeon', 'scrub', 'charge', 'circulator'] as const)(
    'the second may be a %s, by PIN',
    async (role) => {
      const checker = role === 'circulator' ? await house.aPerson(role) : house.people[role]
      const { call, unit, scan } = await brought()
      const verified = await done(verify(call, { scan, ...pinOf(checker) }))
      expect(itemOf(verified)).toMatchObject({
        stage: 'verified',
        verifiedAt: house.api.clock.now().toISOString(),
      })
      const [event] = await house.rows<{ data: object }>(
        `SELECT data FROM event WHERE call_id = $1 AND type = 'item.verified'`,
        [call.id],
      )
      expect(event?.data).toMatchObject({
        checkedBy: checker.id,
        method: 'pin',
        typed: false,
        lot: unit.lot,
        unitId: unit.id,
      })
      expect(
        await house.rows('SELECT checked_by, second_check FROM item WHERE id = $1', [itemOf(call).id]),
      ).toEqual([{ checked_by: checker.id, second_check: 'pin' }])
    },
  )

  test.each([
    ['50', 'either'],
    ['50', 'left'],
    [50, 'left'],
    ['050', 'left'],
    [' 50 ', 'left'],
  ])('by what was heard: %j, %s', async (size, side) => {
    const { call, scan } = await brought()
    await done(verify(call, { scan, ...spoken(size, side) }))
  })

  test.each([
    ['head', '52', 'left'],
    ['head', '5', 'left'],
    ['head', '500', 'left'],
    ['head', '50', 'right'],
    ['femur', '50', 'right'],
    ['femur', '50', 'either'],
  ] as const)('not by what was heard wrong: a %s heard as %s, %s', async (kind, size, side) => {
    const { call, scan } = await brought(kind, kind === 'femur' ? { side: 'left' } : {})
    await house.refused(verify(call, { scan, ...spoken(size, side) }), 'not-as-heard')
  })

  test('typed from the label, and marked so', async () => {
    const { call, unit } = await brought()
    expect(itemOf(await done(verify(call, { typed: typedOf(unit), ...pinOf() }))).typed).toBe(true)
  })

  test.each(['sterile', 'tray'] as const)('but one is enough for what is %s', async (category) => {
    const unit = await house.aPackage(await house.aProduct('other', { category }))
    const call = await house.broughtIn(where, [unit])
    expect(itemOf(await done(verify(call, { scan: scanOf(unit) }))).stage).toBe('verified')
  })
})

describe('no second check', () => {
  const needed = async (body: () => Promise<object> | object, who?: Person) => {
    const { call, scan } = await brought()
    await house.refused(verify(call, { scan, ...(await body()) }, who), 'second-checker-needed')
  }
  test('without one', () => needed(() => ({})))
  test('by the one who scans', () => needed(() => pinOf(house.people.circulator)))
  test('by the one who scans, written in capitals', () =>
    needed(() => pinOf({ ...house.people.circulator, id: house.people.circulator.id.toUpperCase() })))
  test.each(['runner', 'core', 'coordinator', 'admin'] as const)('by a %s', (role) =>
    needed(() => pinOf(house.people[role])),
  )
  test('by somebody who is neither on the team nor signed in', () =>
    needed(async () => pinOf(await house.aPerson('circulator', { signedIn: false }))))
  test('by somebody whose session has ended', () =>
    needed(async () => {
      const gone = await house.aPerson('scrub')
      await house.rows('UPDATE session SET ended_at = $2 WHERE id = $1', [
        gone.sessionId,
        house.api.clock.now(),
      ])
      return pinOf(gone)
    }))
  test('by somebody who is not here any more', () =>
    needed(async () => pinOf(await house.aPerson('scrub', { active: false }))))
  test('by touch, while no tablet is registered', () =>
    needed(() => ({ secondCheck: { method: 'touch', checkerId: house.people.scrub.id } })))

  test('of a kind that the house does not count', async () => {
    await house.rows(`INSERT INTO house_setting (key, value) VALUES ('secondCheckMethods', '["spoken"]')`)
    await needed(() => pinOf())
    const { call, scan } = await brought()
    await done(verify(call, { scan, ...spoken('50', 'left') }))
    await house.rows(`DELETE FROM house_setting WHERE key = 'secondCheckMethods'`)
  })

  test('on the team, though signed in nowhere, is enough', async () => {
    const scrub = await house.aPerson('scrub', { signedIn: false })
    where = await house.aCase({ team: [house.people.surgeon, scrub] })
    const { call, scan } = await brought()
    await done(verify(call, { scan, ...pinOf(scrub) }))
  })
})

describe('a PIN', () => {
  test('that is wrong is refused, and counted: after five nobody may try for a while', async () => {
    const checker = await house.aPerson('scrub')
    const { call, scan } = await brought()
    for (let n = 0; n < 5; n += 1)
      await house.refused(verify(call, { scan, ...pinOf(checker, '0000') }), 'wrong-pin')
    await house.refused(verify(call, { scan, ...pinOf(checker) }), 'too-many-attempts', 429)
    house.api.clock.forward(15 * 60_000)
    await done(verify(call, { scan, ...pinOf(checker) }))
  })

  test('of another person is wrong', async () => {
    await house.rows('UPDATE person SET pin_hash = NULL WHERE id = $1', [house.people.surgeon.id])
    const { call, scan } = await brought()
    await house.refused(verify(call, { scan, ...pinOf(house.people.surgeon) }), 'wrong-pin')
  })

  test('is not kept anywhere', async () => {
    const { call, scan } = await brought()
    await done(verify(call, { scan, ...pinOf() }))
    for (const table of ['event', 'item', 'idempotency_key'])
      expect(
        await house.rows(
          `SELECT 1 FROM ${table} t WHERE t::text LIKE '%"pin":%' OR t::text LIKE '%${TEST_PIN}"%'`,
        ),
        table,
      ).toEqual([])
  })
})

describe('before anything is verified', () => {
  test('the call is read back', async () => {
    const unit = await house.aPackage(await house.aProduct())
    let call = await house.call(where, [[unit.product, 1]])
    call = await done(house.onItem(house.people.core, itemOf(call), 'pull', { scan: scanOf(unit) }))
    call = await done(house.onItem(house.people.core, itemOf(call), 'deliver'))
    await house.refused(verify(call, { scan: scanOf(unit), ...pinOf() }), 'not-read-back')
  })

  test.each([[undefined], [false]])(
    'the package is dry, whole and sealed: not when that is %s',
    async (intact) => {
      const { call, scan } = await brought()
      await house.refused(verify(call, { scan, ...pinOf(), intact }), 'not-intact')
    },
  )

  test('the label is that of the package that was pulled', async () => {
    const { call, unit } = await brought('head', { serial: 'S1' })
    const other = await house.aPackage(unit.product)
    const body = await house.refused(verify(call, { scan: scanOf(other), ...pinOf() }), 'not-the-pulled-unit')
    expect(body).toMatchObject({ expected: { lot: unit.lot, serial: 'S1' }, scanned: { lot: other.lot } })
    await house.refused(
      verify(call, { scan: scanOf(unit, { serial: 'S2' }), ...pinOf() }),
      'not-the-pulled-unit',
    )
  })

  test('the label is of the product that was called', async () => {
    const { call } = await brought()
    const other = await house.aPackage(await house.aProduct('head', { size: '52' }))
    await house.refused(verify(call, { scan: scanOf(other), ...pinOf() }), 'wrong-item')
    const right = await house.aPackage(await house.aProduct('head', { side: 'right' }))
    await house.refused(verify(call, { scan: scanOf(right), ...pinOf() }), 'wrong-side')
  })

  test('the label says the same date', async () => {
    const { call, unit } = await brought()
    await house.refused(
      verify(call, { scan: scanOf(unit, { useByOn: '2029-06-30' }), ...pinOf() }),
      'label-differs',
    )
  })

  test.each([
    ['no-lot', ({ product }: Package) => `01${product.gtin}17280630`],
    ['no-use-by', ({ product, lot }: Package) => `01${product.gtin}10${lot}`],
    [
      'check-digit',
      ({ product, lot }: Package) =>
        `01${product.gtin.slice(0, 13)}${(Number(product.gtin[13]) + 1) % 10}1728063010${lot}`,
    ],
  ])('the label says which package it is and how long it is good: %s', async (reason, write) => {
    const { call, unit } = await brought()
    const body = await house.refused(verify(call, { scan: write(unit), ...pinOf() }), 'label-unreadable', 422)
    expect(body['reason']).toBe(reason)
  })

  test('there is a label: without one it is no input', async () => {
    const { call } = await brought()
    await house.refused(verify(call, pinOf()), 'invalid-input', 422)
  })

  test.each([
    ['unit-expired', `use_by_on = '2026-11-30'`, { useByOn: '2026-11-30' }],
    ['unit-quarantined', `state = 'quarantined'`, {}],
    ['unit-recalled', `state = 'recalled'`, {}],
    ['unit-not-sterile', `sterile = false`, {}],
  ])('the package may still be used: %s', async (code, change, label) => {
    const { call, unit } = await brought()
    await house.rows(`UPDATE unit SET ${change} WHERE id = $1`, [unit.id])
    await house.refused(verify(call, { scan: scanOf(unit, label), ...pinOf() }), code)
  })

  test('what was recalled on its way is not forgotten by delivering it', async () => {
    const unit = await house.aPackage(await house.aProduct())
    let call = await house.readBack(await house.call(where, [[unit.product, 1]]))
    call = await done(house.onItem(house.people.core, itemOf(call), 'pull', { scan: scanOf(unit) }))
    await house.rows(`UPDATE unit SET state = 'recalled' WHERE id = $1`, [unit.id])
    call = await done(house.onItem(house.people.runner, itemOf(call), 'deliver'))
    expect(await house.unitRow(unit.id)).toMatchObject({
      state: 'recalled',
      code: 'OR-1',
      held_for: itemOf(call).id,
    })
    await house.refused(verify(call, { scan: scanOf(unit), ...pinOf() }), 'unit-recalled')
  })
})

describe('parts that go together', () => {
  const together = async () => {
    const units = [
      await house.aPackage(await house.aProduct('stem')),
      await house.aPackage(await house.aProduct('head')),
    ]
    const call = await house.broughtIn(where, units)
    const items = units.map((unit, n) => ({ itemId: itemOf(call, n).id, scan: scanOf(unit) }))
    return { units, call, items }
  }
  const verifyAll = (call: CallView, body: object) =>
    house.onCall(house.people.circulator, call, 'verify', { intact: true, ...body })

  test('are verified at once: one revision, an event for each', async () => {
    const { call, items } = await together()
    house.api.published.clear()
    const verified = await done(verifyAll(call, { items, ...pinOf() }))
    expect(verified.items.map(({ stage }) => stage)).toEqual(['verified', 'verified'])
    expect(verified.revision).toBe(call.revision + 1)
    expect(house.api.published.deltas.map(({ call: told }) => told)).toEqual([verified])
    const events = await house.rows(
      `SELECT item_id FROM event WHERE call_id = $1 AND type = 'item.verified' ORDER BY seq`,
      [call.id],
    )
    expect(events).toEqual(items.map(({ itemId }) => ({ item_id: itemId })))
  })

  test('or not at all: one that will not do leaves the others as they were', async () => {
    const { call, items, units } = await together()
    const other = await house.aPackage(units[1]!.product)
    const second = { ...items[1], scan: scanOf(other) }
    await house.refused(verifyAll(call, { items: [items[0], second], ...pinOf() }), 'not-the-pulled-unit')
    await house.refused(verifyAll(call, { items, ...pinOf(), intact: false }), 'not-intact')
    await house.refused(verifyAll(call, { items }), 'second-checker-needed')
    await house.refused(verifyAll(call, { items, ...pinOf(house.people.surgeon, '0000') }), 'wrong-pin')
  })

  test('name an item once, and one of this call', async () => {
    const { call, items } = await together()
    const foreign = await brought()
    await house.refused(verifyAll(call, { items: [items[0], items[0]], ...pinOf() }), 'invalid-input', 422)
    const stranger = { itemId: itemOf(foreign.call).id, scan: foreign.scan }
    await house.refused(verifyAll(call, { items: [items[0], stranger], ...pinOf() }), 'not-found', 404)
  })
})
