import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  GONE_STATES,
  STATES_WITH_HOLD,
  UNIT_STATES,
  UNUSABLE_REASONS,
  whyUnusable,
  type UnitFacts,
} from './eligibility.js'

const TODAY = '2026-12-01'
const unit = (over: Partial<UnitFacts> = {}): UnitFacts => ({
  state: 'available',
  useByOn: '2027-06-30',
  sterile: true,
  side: 'either',
  ...over,
})

describe('whyUnusable', () => {
  test.each([
    ['a good package', unit(), null],
    ['the use-by day itself', unit({ useByOn: TODAY }), null],
    ['the day after it', unit({ useByOn: '2026-11-30' }), 'unit-expired'],
    ['the last day of a month (day 00 of a label)', unit({ useByOn: '2026-12-31' }), null],
    ['said to be expired, whatever the date', unit({ state: 'expired' }), 'unit-expired'],
    ['recalled', unit({ state: 'recalled' }), 'unit-recalled'],
    ['quarantined', unit({ state: 'quarantined' }), 'unit-quarantined'],
    ['not sterile', unit({ sterile: false }), 'unit-not-sterile'],
    ['of the side of the case', unit({ side: 'left' }), null],
    ['of the other side', unit({ side: 'right' }), 'wrong-side'],
    ['held', unit({ state: 'held' }), null],
    ['pulled', unit({ state: 'pulled' }), null],
    ['in the room', unit({ state: 'inRoom' }), null],
    ['on its way back', unit({ state: 'putBack' }), null],
    ['opened', unit({ state: 'opened' }), 'unit-not-in-stock'],
    ['implanted', unit({ state: 'implanted' }), 'unit-not-in-stock'],
    ['used', unit({ state: 'used' }), 'unit-not-in-stock'],
    ['opened, not implanted', unit({ state: 'notImplanted' }), 'unit-not-in-stock'],
    ['shipped back', unit({ state: 'shippedBack' }), 'unit-not-in-stock'],
    ['written off', unit({ state: 'writtenOff' }), 'unit-not-in-stock'],
  ] as const)('%s: for a left case %j is %s', (_what, one, want) => {
    expect(whyUnusable(one, 'left', TODAY)).toBe(want)
  })

  test('gone goes before recalled, recalled before quarantined, then date, sterility, side', () => {
    const bad = { useByOn: '2020-01-31', sterile: false, side: 'right' } as const
    const first = [
      unit({ ...bad, state: 'writtenOff' }),
      unit({ ...bad, state: 'recalled' }),
      unit({ ...bad, state: 'quarantined' }),
      unit(bad),
      unit({ ...bad, useByOn: TODAY }),
      unit({ ...bad, useByOn: TODAY, sterile: true }),
    ].map((one) => whyUnusable(one, 'left', TODAY))
    expect(first).toEqual(UNUSABLE_REASONS)
  })

  test('a package that may be used today may be used on every day before', () => {
    const facts = fc.record({
      state: fc.constantFrom(...UNIT_STATES),
      useByOn: fc.integer({ min: 0, max: 2000 }).map(day),
      sterile: fc.boolean(),
      side: fc.constantFrom('left', 'right', 'either'),
    }) as fc.Arbitrary<UnitFacts>
    fc.assert(
      fc.property(facts, fc.nat(2000), fc.nat(2000), (one, at, earlier) => {
        if (whyUnusable(one, 'left', day(at + earlier)) === null)
          expect(whyUnusable(one, 'left', day(at))).toBeNull()
      }),
    )
  })
})

test('a package is kept for an item or gone, and an opened one is both', () => {
  expect(STATES_WITH_HOLD.filter((state) => (GONE_STATES as readonly string[]).includes(state))).toEqual([
    'opened',
  ])
})

function day(number: number): string {
  return new Date(Date.UTC(2026, 0, 1 + number)).toISOString().slice(0, 10)
}
