import { randomUUID } from 'node:crypto'
import type { CallView, ItemView } from '@bellpull/contracts'
import { transition, type ItemCommandName } from '@bellpull/domain'
import fc from 'fast-check'
import type request from 'supertest'
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest'
import {
  openHouse,
  scanOf,
  type Package,
  type Person,
  type TestCase,
  type TestHouse,
} from '../../../test/house.js'
import { expectGapless, expectPromisesKept } from '../../../test/promises.js'

let house: TestHouse
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(() => house.newTest())

/** One thing that somebody tries, sensible or not; numbers are taken from what there is. */
interface Attempt {
  readonly what: string
  readonly call: number
  readonly line: number
  readonly unit: number
  readonly who: 'circulator' | 'core' | 'scrub' | 'charge' | 'runner'
  readonly together: boolean
}
const WHATS = [
  ...['make', 'make', 'makeEarly', 'makeTwo', 'makeWords'],
  ...['readBack', 'confirm', 'acceptAll', 'cancelAll'],
  ...[
    'accept',
    'accept',
    'decline',
    'takeOver',
    'pullHeld',
    'pullHeld',
    'pullAny',
    'deliver',
    'deliver',
    'deliver',
  ],
  ...Array<string>(12).fill('next'),
  ...['verify', 'open', 'implant', 'use', 'notImplanted'],
  ...['putBack', 'shelve', 'shelve', 'cancel', 'undo', 'undo', 'recall', 'midnight'],
]
const attempt: fc.Arbitrary<Attempt> = fc.record({
  what: fc.constantFrom(...WHATS),
  call: fc.nat(5),
  line: fc.nat(1),
  unit: fc.nat(20),
  who: fc.constantFrom('circulator', 'circulator', 'circulator', 'core', 'scrub', 'charge', 'runner'),
  // At the same time as the one after it.
  together: fc.boolean(),
})

interface World {
  readonly cases: readonly TestCase[]
  readonly units: Package[]
  /** As last heard: sometimes out of date, as on a real screen. */
  readonly calls: CallView[]
}

/** How to send an attempt (a request that is awaited is on its way), or `null` when it changes the world itself or there is nothing to try it on. */
async function send(world: World, one: Attempt): Promise<(() => request.Test) | null> {
  const where = world.cases[one.call % world.cases.length]!
  const unit = world.units[one.unit % world.units.length]!
  const makes: Record<string, () => request.Test> = {
    make: () => house.tryCall(where, [[unit.product, 1]], { inMinutes: one.line * 10 }),
    makeEarly: () => house.tryCall(where, [[unit.product, 1]], { kind: 'early', inMinutes: 30 }),
    makeTwo: () => house.tryCall(where, [[unit.product, 2]]),
    makeWords: () => house.tryCall(where, [[unit.product, 1], 'Stool']),
  }
  const make = makes[one.what]
  if (make) return make
  if (one.what === 'recall') {
    await house.rows(
      `UPDATE unit SET state = 'recalled' WHERE id = $1 AND state IN ('available', 'held', 'pulled', 'inRoom', 'putBack')`,
      [unit.id],
    )
    return null
  }
  if (one.what === 'midnight') {
    house.api.clock.forward(60_000)
    return null
  }
  const target = targetOf(world, one)
  if (!target) return null
  const { call, item } = target
  const who = house.people[one.who]
  if (one.what in ON_WHOLE) return () => house.onCall(who, call, ON_WHOLE[one.what]!)
  const name = one.what === 'next' ? NEXT.find((step) => fits(item, step, who)) : one.what
  if (name === 'verify' && call.readBack === null)
    return () => house.onCall(house.people.charge, call, 'readBack')
  return name === undefined ? null : () => command(world, name, item, who, unit)
}

const ON_WHOLE: Record<string, string> = {
  readBack: 'readBack',
  confirm: 'confirm',
  acceptAll: 'accept',
  cancelAll: 'cancel',
}
/** The way of an item to its end, the furthest step first. */
const NEXT = ['implant', 'use', 'open', 'verify', 'deliver', 'pullHeld'] as const
const fits = (item: ItemView, what: string, { role }: Person): boolean => {
  const name = (what.startsWith('pull') ? 'pull' : what) as ItemCommandName
  return transition({ ...item, putBackPending: item.putBack !== null }, name, role).ok
}

/** Mostly something that the command fits, so that much happens; now and then anything, so that much is refused. */
function targetOf({ calls }: World, one: Attempt): { call: CallView; item: ItemView } | undefined {
  const all = calls.flatMap((call) => call.items.map((item) => ({ call, item })))
  const who = house.people[one.who]
  const wanted = one.what === 'next' ? NEXT : [one.what]
  const fitting = all.filter(({ item }) => wanted.some((what) => what in ON_WHOLE || fits(item, what, who)))
  const pool = fitting.length === 0 || one.unit % 6 === 0 ? all : fitting
  return pool[(one.call * 2 + one.line) % Math.max(1, pool.length)]
}

function command(world: World, what: string, item: ItemView, who: Person, unit: Package): request.Test {
  const held = world.units.find(({ id }) => id === item.unit?.id) ?? unit
  const checker = who === house.people.scrub ? house.people.surgeon : house.people.scrub
  // Heard, not a PIN: hashing would take most of the time.
  const spoken = { checkerId: checker.id, method: 'spoken', heard: { size: '50', side: 'left' } }
  const bodies: Record<string, [name: string, body: object]> = {
    pullHeld: ['pull', { scan: scanOf(held) }],
    pullAny: ['pull', { scan: scanOf(unit) }],
    verify: ['verify', { scan: scanOf(held), intact: true, secondCheck: spoken }],
    open: ['open', { scan: scanOf(held) }],
    notImplanted: ['notImplanted', { reason: 'defect' }],
    shelve: ['shelve', { inspect: unit.lot === 'L0' }],
  }
  const [name, body] = bodies[what] ?? [what, {}]
  return house.onItem(who, item, name, body, randomUUID())
}

function hear(world: World, reply: request.Response): void {
  // Refusals of every kind are welcome, failures are not.
  expect([200, 201, 403, 409, 422], JSON.stringify(reply.body)).toContain(reply.status)
  if (reply.status >= 400) return
  const call = reply.body as CallView
  const known = world.calls.findIndex(({ id }) => id === call.id)
  if (known === -1) world.calls.push(call)
  else if (world.calls[known]!.version < call.version) world.calls[known] = call
}

/** The line that every walk has to have gone; what is rarer has tests of its own and depends on who came first. */
const SEEN = [
  ...['call.called', 'call.readBack', 'item.accepted', 'item.pulled', 'item.delivered', 'item.verified'],
  'item.opened',
]

/** In milliseconds. */
const LONG = 120_000

test(
  'whatever is tried, in whatever order and at the same time: the house keeps its promises',
  { timeout: LONG },
  async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(attempt, { minLength: 25, maxLength: 45 }), async (attempts) => {
        house.newTest()
        const cases = [
          await house.aCase(),
          await house.aCase({ room: house.rooms[1] }),
          await house.aCase({ room: house.rooms[2] }),
        ]
        const products = [
          await house.aProduct('head'),
          await house.aProduct('stem'),
          await house.aProduct('other', { category: 'sterile' }),
        ]
        const world: World = { cases, units: [], calls: [] }
        for (const product of products)
          for (const at of [house.places.binA, house.places.binB, cases[0]!.room.cart])
            world.units.push(await house.aPackage(product, { at, lot: `L${world.units.length}` }))
        const before = (await house.board()).revisions
        house.api.published.clear()

        let running: Promise<void>[] = []
        for (const one of attempts) {
          const sent = await send(world, one)
          if (sent) running.push(sent().then((reply) => hear(world, reply)))
          if (!one.together) {
            await Promise.all(running)
            running = []
          }
          house.api.clock.forward(1_500)
        }
        await Promise.all(running)

        await expectPromisesKept(house.api)
        expectGapless(house.api.published.deltas, before)
        const board = await house.board()
        for (const call of board.calls) {
          const told = house.api.published.deltas
            .filter((delta) => (delta.call as CallView).id === call.id)
            .at(-1)
          if (told) expect(told.revision).toBe(call.revision)
        }
      }),
      { seed: 20_261_201, numRuns: 24, endOnFailure: true },
    )
    // A walk that never got to the end would prove nothing.
    const seen = await house.rows<{ type: string }>('SELECT DISTINCT type FROM event')
    expect(seen.map(({ type }) => type)).toEqual(expect.arrayContaining(SEEN))
  },
)
