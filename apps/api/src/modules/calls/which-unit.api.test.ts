import { randomUUID } from 'node:crypto'
import { chooseUnits, OWNERS, type Candidate } from '@bellpull/domain'
import fc from 'fast-check'
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest'
import { openHouse, type TestHouse } from '../../../test/house.js'
import { soonUntil } from './holds.js'

let house: TestHouse
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(() => house.newTest())

const dayFromToday = (days: number) =>
  new Date(Date.parse(house.api.clock.today()) + days * 86_400_000).toISOString().slice(0, 10)

interface Wanted {
  readonly useBy: number
  readonly at: 'binA' | 'binB' | 'room' | 'elsewhere'
  readonly owner: Candidate['owner']
  readonly state: string
  readonly sterile: boolean
}
/** Few values, so that many packages are equal in something; around today and around the 30th day. */
const stock = fc.array(
  fc.record<Wanted>({
    useBy: fc.constantFrom(-1, 0, 1, 29, 30, 31, 200),
    at: fc.constantFrom('binA', 'binB', 'room', 'elsewhere'),
    owner: fc.constantFrom(...OWNERS),
    state: fc.constantFrom('available', 'available', 'available', 'available', 'quarantined', 'putBack'),
    sterile: fc.constantFrom(true, true, true, false),
  }),
  { maxLength: 9 },
)

test('a day counts as soon until the 30th day from today', () => {
  expect(soonUntil('2026-12-01')).toBe('2026-12-31')
  expect(soonUntil('2028-02-01')).toBe('2028-03-02')
})

test.each([
  ['at once', [] as string[]],
  ['carefully', ['Stool']],
])('whatever is in stock, a call made %s holds what the rule of the house chooses', async (_how, extra) => {
  await fc.assert(
    fc.asyncProperty(
      stock,
      fc.integer({ min: 1, max: 4 }),
      fc.constantFrom(0, 10),
      async (packages, count, inMinutes) => {
        house.newTest()
        const where = await house.aCase()
        const head = await house.aProduct()
        const places = { ...house.places, room: where.room.cart, elsewhere: house.rooms[1].cart }
        const usable: Candidate[] = []
        for (const { useBy, at, owner, state, sterile } of packages) {
          const useByOn = dayFromToday(useBy)
          const { id } = await house.aPackage(head, { useByOn, at: places[at], owner, state, sterile })
          if (useBy >= 0 && at !== 'elsewhere' && state === 'available' && sterile)
            usable.push({ id, useByOn, owner, inRoom: at === 'room', walkOrder: at === 'binA' ? 10 : 20 })
        }
        const made = await house.call(where, [[head, count], ...extra], { inMinutes, key: randomUUID() })
        const options = { now: inMinutes === 0, soonUntil: soonUntil(house.api.clock.today()) }
        const held = made.items.flatMap(({ unit }) => unit?.id ?? [])
        expect(held).toEqual(chooseUnits(usable, count, options).map(({ id }) => id))
      },
    ),
    { numRuns: 40 },
  )
})
