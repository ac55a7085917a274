import type { Role } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { IFEOMA, MAGDA, call, item } from '../../../../test/calls'
import { mustAct } from './must-act'
import type { BoardRow } from './rows'

const made = call([item()])
const row = (over: Partial<BoardRow> = {}): BoardRow => ({
  call: made,
  item: made.items[0]!,
  late: false,
  escalation: 0,
  walk: [],
  ...over,
})
const NONE = new Set<string>()
const HERE = new Set([made.room.id])
const ELSEWHERE = new Set(['another room'])

describe('the one soft tone sounds only for the person who must act', () => {
  test.each<[Role, ReadonlySet<string>, boolean]>([
    ['circulator', HERE, true],
    ['circulator', NONE, true],
    ['circulator', ELSEWHERE, false],
    ['runner', NONE, true],
    ['core', NONE, true],
    ['charge', NONE, false],
    ['scrub', HERE, false],
    ['surgeon', HERE, false],
    ['coordinator', NONE, false],
  ])('a call that waits: %s with rooms %j: %s', (role, rooms, want) => {
    expect(mustAct(row(), { id: 'v', role }, rooms, NONE)).toBe(want)
  })

  test.each([
    [0, false],
    [1, false],
    [2, true],
    [3, true],
  ] as const)('the charge nurse at level %d: %s', (escalation, want) => {
    expect(mustAct(row({ escalation }), MAGDA, NONE, NONE)).toBe(want)
  })

  test('nothing sounds during a time-out, nor for what somebody else has', () => {
    expect(mustAct(row(), IFEOMA, HERE, new Set([made.caseId]))).toBe(false)
    const taken = call([item({ stage: 'accepted', acceptedBy: MAGDA })])
    expect(mustAct(row({ call: taken, item: taken.items[0]! }), IFEOMA, NONE, NONE)).toBe(false)
  })
})
