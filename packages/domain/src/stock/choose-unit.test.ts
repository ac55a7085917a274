import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { EXPIRES_SOON_DAYS, OWNERS, chooseUnits, type Candidate, type ChooseOptions } from './choose-unit.js'

/** Today is 1 December 2026; 30 days on is the last day that counts as soon. */
const SOON_UNTIL = '2026-12-31'
const routine: ChooseOptions = { now: false, soonUntil: SOON_UNTIL }
const rush: ChooseOptions = { now: true, soonUntil: SOON_UNTIL }

const candidate = (id: string, over: Partial<Candidate> = {}): Candidate => ({
  id,
  useByOn: '2027-06-30',
  inRoom: false,
  walkOrder: 10,
  owner: 'owned',
  ...over,
})
const ids = (units: readonly Candidate[]) => units.map(({ id }) => id)
const firstOf = (units: Candidate[], options: ChooseOptions) => chooseUnits(units, 1, options)[0]?.id

describe('which package is held', () => {
  test.each<[string, Candidate, Candidate, ChooseOptions]>([
    ['first to expire', candidate('b', { useByOn: '2027-02-28' }), candidate('a'), routine],
    [
      'first to expire, however far',
      candidate('b', { useByOn: '2027-02-28', walkOrder: 90 }),
      candidate('a'),
      routine,
    ],
    ['then the nearest', candidate('b', { walkOrder: 3 }), candidate('a', { walkOrder: 4 }), routine],
    [
      'in the room is nearest',
      candidate('b', { inRoom: true, walkOrder: 900 }),
      candidate('a', { walkOrder: 1 }),
      routine,
    ],
    ['then what the house owns', candidate('b'), candidate('a', { owner: 'consigned' }), routine],
    [
      'then consigned before a loaner',
      candidate('b', { owner: 'consigned' }),
      candidate('a', { owner: 'loaner' }),
      routine,
    ],
    ['place goes before owner', candidate('b', { owner: 'loaner', walkOrder: 1 }), candidate('a'), routine],
    [
      'not now: first to expire goes before in the room',
      candidate('b', { useByOn: '2027-02-28' }),
      candidate('a', { inRoom: true }),
      routine,
    ],
    [
      'now: in the room goes before first to expire',
      candidate('b', { inRoom: true }),
      candidate('a', { useByOn: '2027-02-28' }),
      rush,
    ],
    [
      'now: unless it expires on the 30th day',
      candidate('b', { useByOn: SOON_UNTIL }),
      candidate('a', { inRoom: true }),
      rush,
    ],
    [
      'now: the 31st day is not soon',
      candidate('b', { inRoom: true }),
      candidate('a', { useByOn: '2027-01-01' }),
      rush,
    ],
    [
      'now: of two that expire soon, the first to expire',
      candidate('b', { useByOn: '2026-12-05' }),
      candidate('a', { useByOn: '2026-12-06', inRoom: true }),
      rush,
    ],
    [
      'now: none in the room, first to expire',
      candidate('b', { useByOn: '2027-02-28' }),
      candidate('a'),
      rush,
    ],
    ['equal in all: always the same one', candidate('a'), candidate('b'), routine],
  ])('%s', (_what, better, worse, options) => {
    expect(firstOf([better, worse], options)).toBe(better.id)
    expect(firstOf([worse, better], options)).toBe(better.id)
  })

  test('soon is 30 days (a house may set its own)', () => {
    expect(EXPIRES_SOON_DAYS).toBe(30)
  })

  test.each([-1, 0.5, Number.NaN])('a count of %s is refused', (count) => {
    expect(() => chooseUnits([], count, routine)).toThrow(RangeError)
  })

  test('none of none, and none wanted', () => {
    expect(chooseUnits([], 3, routine)).toEqual([])
    expect(chooseUnits([candidate('a')], 0, routine)).toEqual([])
  })
})

describe('any stock', () => {
  const stock = fc.uniqueArray(
    fc.record({
      id: fc.uuid(),
      useByOn: fc
        .integer({ min: 0, max: 90 })
        .map((days) => new Date(Date.UTC(2026, 11, 1 + days)).toISOString().slice(0, 10)),
      inRoom: fc.boolean(),
      walkOrder: fc.nat(3),
      owner: fc.constantFrom(...OWNERS),
    }),
    { selector: ({ id }) => id, maxLength: 12 },
  )
  const options = fc.constantFrom(routine, rush)
  const count = fc.nat(12)

  test('the order in which packages are looked at does not matter', () => {
    fc.assert(
      fc.property(stock, count, options, fc.infiniteStream(fc.nat()), (units, n, wish, keys) => {
        const shuffled = units
          .map((one) => ({ one, key: keys.next().value ?? 0 }))
          .sort((a, b) => a.key - b.key)
          .map(({ one }) => one)
        expect(ids(chooseUnits(shuffled, n, wish))).toEqual(ids(chooseUnits(units, n, wish)))
      }),
    )
  })

  test('as many as wanted, or all there are; each once; the input is left as it was', () => {
    fc.assert(
      fc.property(stock, count, options, (units, n, wish) => {
        const before = structuredClone(units)
        const chosen = ids(chooseUnits(units, n, wish))
        expect(chosen).toHaveLength(Math.min(n, units.length))
        expect(new Set(chosen).size).toBe(chosen.length)
        expect(units).toEqual(before)
      }),
    )
  })

  test('choosing fewer is choosing the first of more', () => {
    fc.assert(
      fc.property(stock, count, options, (units, n, wish) => {
        expect(ids(chooseUnits(units, n, wish))).toEqual(ids(chooseUnits(units, 12, wish)).slice(0, n))
      }),
    )
  })

  test('not now: nothing that is left expires before anything that was chosen', () => {
    fc.assert(
      fc.property(stock, count, (units, n) => {
        const chosen = chooseUnits(units, n, routine)
        const left = units.filter((one) => !chosen.includes(one))
        for (const taken of chosen) for (const one of left) expect(taken.useByOn <= one.useByOn).toBe(true)
      }),
    )
  })

  test('now: nothing outside is chosen while one in the room is left, unless it expires soon', () => {
    fc.assert(
      fc.property(stock, count, (units, n) => {
        const chosen = chooseUnits(units, n, rush)
        const leftInRoom = units.some((one) => one.inRoom && !chosen.includes(one))
        const outside = chosen.filter((one) => !one.inRoom && one.useByOn > SOON_UNTIL)
        if (leftInRoom) expect(outside).toEqual([])
      }),
    )
  })
})
