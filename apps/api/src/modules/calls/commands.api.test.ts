import type { CallView, ItemView } from '@bellpull/contracts'
import {
  CALL_COMMANDS,
  ITEM_COMMANDS,
  ROLES,
  callCommandPermission,
  itemCommandPermission,
  transition,
  type ItemCommandName,
} from '@bellpull/domain'
import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  done,
  itemOf,
  openHouse,
  scanOf,
  type Package,
  type Person,
  type TestHouse,
} from '../../../test/house.js'

let house: TestHouse
/** One item at every station and end, each in a call of its own. */
let at: Record<string, { call: CallView; item: ItemView; unit: Package }>
beforeAll(async () => {
  house = await openHouse()
  at = await everyStation()
})
afterAll(() => house.api.close())
beforeEach(() => house.newTest())

async function everyStation(): Promise<typeof at> {
  const found: typeof at = {}
  const { circulator, core, runner } = house.people
  for (const station of [
    'called',
    'accepted',
    'pulled',
    'inRoom',
    'verified',
    'opened',
    'implanted',
    'putBack',
  ]) {
    house.newTest()
    const where = await house.aCase()
    const unit = await house.aPackage(await house.aProduct())
    let call = await house.readBack(await house.call(where, [[unit.product, 1]]))
    for (const [on, who, name, body] of [
      ['called', circulator, 'accept', {}],
      ['accepted', core, 'pull', { scan: scanOf(unit) }],
      ['pulled', runner, 'deliver', {}],
      ['inRoom', circulator, 'verify', verifyOf(unit)],
      ['verified', circulator, 'open', {}],
      ['opened', circulator, 'implant', {}],
    ] as const) {
      const item = itemOf(call)
      if (item.stage !== on || item.outcome !== null || station === on) continue
      if (station === 'putBack' && on === 'verified') continue
      call = await done(house.onItem(who, item, name, body))
    }
    if (station === 'putBack') call = await done(house.onItem(circulator, itemOf(call), 'putBack'))
    found[station] = { call, item: itemOf(call), unit }
  }
  return found
}

const verifyOf = (unit: Package) => ({
  scan: scanOf(unit),
  intact: true,
  secondCheck: house.pin(house.people.scrub),
})
const bodies: Partial<Record<ItemCommandName, (unit: Package) => object>> = {
  pull: (unit) => ({ scan: scanOf(unit) }),
  verify: verifyOf,
  notImplanted: () => ({ reason: 'damaged' }),
}
const BUILT = ITEM_COMMANDS.filter((name) => ROLES.some((role) => itemCommandPermission(name, role).ok))
const NOT_BUILT = ITEM_COMMANDS.filter((name) => !BUILT.includes(name))
const FROM: Partial<Record<ItemCommandName, string>> = {
  decline: 'accepted',
  deliver: 'pulled',
  verify: 'inRoom',
  open: 'verified',
  implant: 'opened',
  use: 'opened',
  notImplanted: 'opened',
  putBack: 'inRoom',
  shelve: 'putBack',
  takeOver: 'accepted',
  undo: 'accepted',
}
const someoneFor = (name: ItemCommandName): Person =>
  house.people[ROLES.find((role) => role !== 'surgeon' && itemCommandPermission(name, role).ok)!]

describe.each(BUILT)('%s', (name) => {
  const target = () => at[FROM[name] ?? 'called']!
  const body = () => bodies[name]?.(target().unit) ?? {}

  test('is refused to every role that its row does not name', async () => {
    for (const role of ROLES)
      if (!itemCommandPermission(name, role).ok)
        await house.refused(
          house.onItem(house.people[role], target().item, name, body()),
          'not-permitted',
          403,
        )
  })

  test('is refused when the item has gone on since', async () => {
    const old = { ...target().item, version: target().item.version + 1 }
    const refusal = await house.refused(house.onItem(someoneFor(name), old, name, body()), 'item-moved-on')
    expect(refusal['detail']).toBe(`It is at version ${target().item.version} now.`)
  })

  test('is refused from every station and end from which the table has no such step', async () => {
    const who = someoneFor(name)
    let tried = 0
    for (const [station, { item, unit }] of Object.entries(at)) {
      const state = { ...item, putBackPending: station === 'putBack' }
      if (transition(state, name, who.role).ok) continue
      const code = name === 'undo' ? 'nothing-to-undo' : 'item-moved-on'
      await house.refused(house.onItem(who, item, name, bodies[name]?.(unit) ?? {}), code)
      tried += 1
    }
    expect(tried).toBeGreaterThan(0)
  })

  test('needs a key, refuses what it does not know, and finds nothing under another id', async () => {
    const who = someoneFor(name)
    const { item } = target()
    const send = (of: { id: string }, rest: object, key?: string | null) =>
      house
        .as(who)
        .post(`/items/${of.id}/commands`, { name, expectedVersion: item.version, ...body(), ...rest }, key)
    await house.refused(send(item, {}, null), 'idempotency-key-missing', 422)
    await house.refused(send(item, { hurry: true }), 'invalid-input', 422)
    await house.refused(send(item, { expectedVersion: undefined }), 'invalid-input', 422)
    await house.refused(send({ id: randomUUID() }, {}), 'not-found', 404)
    await house.refused(send({ id: 'none' }, {}), 'not-found', 404)
  })
})

describe('what this release does not have', () => {
  test.each(NOT_BUILT)('%s is refused by its row, and is not found by those who may', async (name) => {
    const { item } = at['accepted']!
    for (const role of ROLES) {
      const wrong = itemCommandPermission(name, role)
      const denied = !wrong.ok && wrong.because === 'wrong-role'
      const attempt = house.onItem(house.people[role], item, name)
      await house.refused(attempt, denied ? 'not-permitted' : 'not-found', denied ? 403 : 404)
    }
  })

  test('a name that nobody knows is no input, for whoever has any command here', async () => {
    const { item, call } = at['accepted']!
    const { circulator, admin, core, coordinator } = house.people
    await house.refused(house.onItem(circulator, item, 'teleport'), 'invalid-input', 422)
    await house.refused(house.onItem(coordinator, item, 'teleport'), 'invalid-input', 422)
    await house.refused(house.onItem(admin, item, 'teleport'), 'not-permitted', 403)
    await house.refused(house.onCall(circulator, call, 'open'), 'invalid-input', 422)
    await house.refused(house.onCall(core, call, 'toString'), 'invalid-input', 422)
    await house.refused(house.onCall(coordinator, call, 'teleport'), 'not-permitted', 403)
    await house.refused(house.as(circulator).post(`/items/${item.id}/commands`, {}), 'invalid-input', 422)
  })
})

describe.each(CALL_COMMANDS)('%s of a whole call', (name) => {
  const body = () =>
    name === 'verify' ? { items: [{ itemId: at['inRoom']!.item.id, scan: scanOf(at['inRoom']!.unit) }] } : {}
  const someone = () =>
    house.people[ROLES.find((role) => role !== 'surgeon' && callCommandPermission(name, role).ok)!]
  const target = () => (name === 'verify' ? at['inRoom']! : at['called']!)

  test('is refused to every role that its row does not name', async () => {
    for (const role of ROLES)
      if (!callCommandPermission(name, role).ok)
        await house.refused(
          house.onCall(house.people[role], target().call, name, body()),
          'not-permitted',
          403,
        )
  })

  test('is refused when the call has gone on since', async () => {
    const old = { ...target().call, version: target().call.version - 1 }
    await house.refused(house.onCall(someone(), old, name, body()), 'call-moved-on')
  })

  test('is refused once nothing of it is open', async () => {
    const { call } = at['implanted']!
    const items = [{ itemId: itemOf(call).id, scan: scanOf(at['implanted']!.unit) }]
    const code = name === 'verify' ? 'item-moved-on' : 'call-moved-on'
    await house.refused(house.onCall(someone(), call, name, name === 'verify' ? { items } : {}), code)
  })

  test('needs a key, and finds nothing under another id', async () => {
    const send = (id: string, key?: string | null) =>
      house.as(someone()).post(`/calls/${id}/commands`, { name, expectedVersion: 1, ...body() }, key)
    await house.refused(send(target().call.id, null), 'idempotency-key-missing', 422)
    await house.refused(send(randomUUID()), 'not-found', 404)
  })
})

test('a command that comes twice is done once, and both are answered alike', async () => {
  const unit = await house.aPackage(await house.aProduct())
  const call = await house.call(await house.aCase(), [[unit.product, 1]])
  const key = randomUUID()
  const accept = () => house.onItem(house.people.runner, itemOf(call), 'accept', {}, key)
  const first = await accept()
  const before = await house.stored()
  house.api.published.clear()
  const again = await accept()
  expect([again.status, again.text]).toEqual([200, first.text])
  expect(await house.stored()).toEqual(before)
  expect(house.api.published.all).toEqual([])
  await house.refused(
    house.onItem(house.people.runner, itemOf(call), 'decline', {}, key),
    'idempotency-key-reused',
    422,
  )
})

test('sixty commands in ten seconds are borne from one person, refused ones counted, and no more', async () => {
  const hasty = await house.aPerson('runner')
  const codes: number[] = []
  for (let n = 0; n < 61; n += 1)
    codes.push((await house.onItem(hasty, at['implanted']!.item, 'accept')).status)
  expect(codes.slice(0, 60).every((code) => code === 409)).toBe(true)
  expect(codes[60]).toBe(429)
})
