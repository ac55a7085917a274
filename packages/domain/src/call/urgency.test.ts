import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { HOLDS, OUTCOMES, STAGES } from './categories.js'
import {
  BOARD_GROUPS,
  boardGroup,
  compareUrgency,
  escalationLevel,
  isLate,
  isNowCall,
  type BoardItem,
  type Timing,
} from './urgency.js'

const S = 1_000
const MIN = 60 * S
const T = Date.UTC(2026, 11, 1, 10, 45)
const ARRIVAL = 6 * MIN

const item = (over: Partial<BoardItem> = {}): BoardItem => ({
  stage: 'called',
  outcome: null,
  hold: 'held',
  putBackPending: false,
  ...over,
})
const now: Timing = { kind: 'confirmed', calledAtMs: T, neededAtMs: T }
const inTwenty: Timing = { kind: 'confirmed', calledAtMs: T, neededAtMs: T + 20 * MIN }
const early: Timing = { ...inTwenty, kind: 'early' }
const standby: Timing = { kind: 'standby', calledAtMs: T, neededAtMs: null }

describe('the groups of the board', () => {
  test('none free comes first, put-backs last', () => {
    expect(BOARD_GROUPS).toEqual(['noneFree', 'waiting', 'onTheWay', 'inTheRoom', 'putBack'])
  })

  test.each([
    [item({ hold: 'noneFree' }), 'noneFree'],
    [item(), 'waiting'],
    [item({ hold: 'notStocked' }), 'waiting'],
    [item({ stage: 'accepted' }), 'onTheWay'],
    [item({ stage: 'pulled' }), 'onTheWay'],
    [item({ stage: 'inRoom' }), 'inTheRoom'],
    [item({ stage: 'verified' }), 'inTheRoom'],
    [item({ stage: 'opened' }), 'inTheRoom'],
    [item({ stage: 'pulled', outcome: 'returned', putBackPending: true }), 'putBack'],
    [item({ stage: 'pulled', outcome: 'returned' }), null],
    [item({ hold: 'noneFree', outcome: 'cancelled' }), null],
    [item({ stage: 'opened', outcome: 'implanted' }), null],
  ] as const)('%j is in %s', (one, group) => {
    expect(boardGroup(one)).toBe(group)
  })

  test('every item without an end is somewhere on the board, and only put-backs stay after it', () => {
    for (const stage of STAGES)
      for (const hold of HOLDS)
        for (const outcome of [null, ...OUTCOMES])
          for (const putBackPending of [false, true])
            expect(boardGroup({ stage, hold, outcome, putBackPending }) !== null).toBe(
              outcome === null || putBackPending,
            )
  })
})

describe('a now call', () => {
  test.each([
    [now, true],
    [{ ...now, neededAtMs: T + MIN - 1 }, true],
    [{ ...now, neededAtMs: T + MIN }, false],
    [inTwenty, false],
    [{ ...early, neededAtMs: T }, false],
    [standby, false],
    [{ ...now, calledAtMs: T - 30 * MIN, confirmedAtMs: T }, true],
    [{ ...now, calledAtMs: T - 30 * MIN, confirmedAtMs: null }, false],
  ] as const)('%j: %s', (call, want) => {
    expect(isNowCall(call)).toBe(want)
  })
})

describe('escalation of what nobody accepts (60, 120, 240 s: common practice, no source)', () => {
  test.each([
    [0, 0],
    [60 * S - 1, 0],
    [60 * S, 1],
    [120 * S - 1, 1],
    [120 * S, 2],
    [240 * S - 1, 2],
    [240 * S, 3],
    [24 * 60 * MIN, 3],
  ])('a now call after %d ms: level %d', (waited, level) => {
    expect(escalationLevel(now, T + waited, ARRIVAL)).toBe(level)
  })

  test.each([
    [13 * MIN, 0],
    [14 * MIN + 60 * S - 1, 0],
    [14 * MIN + 60 * S, 1],
    [14 * MIN + 120 * S, 2],
    [14 * MIN + 240 * S, 3],
  ])('needed in 20 minutes, 6 minutes away: after %d ms level %d', (waited, level) => {
    expect(escalationLevel(inTwenty, T + waited, ARRIVAL)).toBe(level)
    expect(escalationLevel(early, T + waited, ARRIVAL)).toBe(level)
  })

  test('a call that is needed sooner than it can come counts from when it was made', () => {
    const soon: Timing = { ...inTwenty, neededAtMs: T + 2 * MIN }
    expect(escalationLevel(soon, T + 59 * S, ARRIVAL)).toBe(0)
    expect(escalationLevel(soon, T + 60 * S, ARRIVAL)).toBe(1)
  })

  test('an early call that is confirmed for now counts from its confirmation, not from before it', () => {
    const confirmed: Timing = { ...now, calledAtMs: T - 30 * MIN, confirmedAtMs: T }
    expect(escalationLevel(confirmed, T, ARRIVAL)).toBe(0)
    expect(escalationLevel(confirmed, T + 120 * S, ARRIVAL)).toBe(2)
  })

  test('stand by never comes forward', () => {
    fc.assert(
      fc.property(fc.nat(10 * 24 * 60 * MIN), (waited) => {
        expect(escalationLevel(standby, T + waited, ARRIVAL)).toBe(0)
      }),
    )
  })

  test('never goes back as time goes on', () => {
    fc.assert(
      fc.property(fc.nat(60 * MIN), fc.nat(60 * MIN), fc.nat(30 * MIN), (at, later, arrival) => {
        const level = (ms: number) => escalationLevel(inTwenty, T + ms, arrival)
        expect(level(at + later)).toBeGreaterThanOrEqual(level(at))
      }),
    )
  })
})

describe('late', () => {
  test.each([
    ['at the very moment', item(), inTwenty, T + 20 * MIN, false],
    ['a moment after', item(), inTwenty, T + 20 * MIN + 1, true],
    ['on its way', item({ stage: 'pulled' }), inTwenty, T + 21 * MIN, true],
    ['none free is late as well', item({ hold: 'noneFree' }), inTwenty, T + 21 * MIN, true],
    ['in the room', item({ stage: 'inRoom' }), inTwenty, T + 21 * MIN, false],
    ['cancelled', item({ outcome: 'cancelled' }), inTwenty, T + 21 * MIN, false],
    ['stand by', item(), standby, T + 24 * 60 * MIN, false],
  ])('%s', (_what, one, call, at, want) => {
    expect(isLate(one, call, at)).toBe(want)
  })
})

describe('compareUrgency', () => {
  test('soonest needed first, stand by last, the older call first between equals', () => {
    const older = { ...standby, calledAtMs: T - MIN }
    const before = { ...now, calledAtMs: T - MIN }
    const all = [standby, inTwenty, now, older, before]
    expect(all.sort(compareUrgency)).toEqual([before, now, inTwenty, older, standby])
  })

  test('two stand-by calls of one moment are equal', () => {
    expect(compareUrgency(standby, { ...standby })).toBe(0)
  })

  test('orders the same whatever the order before', () => {
    const timing = fc.record({
      kind: fc.constantFrom('early', 'confirmed', 'standby'),
      calledAtMs: fc.nat(100),
      neededAtMs: fc.option(fc.nat(100)),
    }) as fc.Arbitrary<Timing>
    fc.assert(
      fc.property(fc.array(timing), (calls) => {
        const keys = (list: Timing[]) => list.map((call) => [call.neededAtMs, call.calledAtMs])
        expect(keys([...calls].reverse().sort(compareUrgency))).toEqual(keys([...calls].sort(compareUrgency)))
      }),
    )
  })
})
