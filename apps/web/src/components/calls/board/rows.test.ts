import type { CallView } from '@bellpull/contracts'
import { describe, expect, test } from 'vitest'
import { JORY, at, call, instant, item, unit } from '../../../../test/calls'
import { blocksOf, boardSections, countsOf, isLateRow, type BoardSection, type BoardView } from './rows'
import { oneWalk } from './walk'

const view = (over: Partial<BoardView> = {}): BoardView => ({
  role: 'circulator',
  roomIds: null,
  nowMs: at('10:45'),
  ...over,
})

/** "waiting: Head 50, Stem 9" of each section. */
const shown = (sections: readonly BoardSection[]): string[] =>
  sections.map(({ section, rows }) => `${section}: ${rows.map((row) => row.item.label).join(', ')}`)

const now = (label: string, calledAt: string, over: Partial<CallView> = {}) =>
  call([item({ label })], { neededAt: instant(calledAt), calledAt: instant(calledAt), ...over })

describe('groups of the board', () => {
  const putBack = { toCode: 'A1-8', since: instant('10:40'), inspect: false, walkOrder: 80 }
  const calls = [
    call([item({ label: 'Opened', stage: 'opened' })]),
    call([item({ label: 'Going back', stage: 'pulled', outcome: 'changed', putBack })]),
    call([item({ label: 'Pulled', stage: 'pulled', acceptedBy: JORY })]),
    call([item({ label: 'Settled', stage: 'opened', outcome: 'implanted' })]),
    call([item({ label: 'Waits' })]),
    call([item({ label: 'Short', hold: 'noneFree' })]),
  ]

  test('stand in the order of the job, empty ones left out, settled items nowhere', () => {
    expect(shown(boardSections(calls, view()))).toEqual([
      'noneFree: Short',
      'waiting: Waits',
      'onTheWay: Pulled',
      'inTheRoom: Opened',
      'putBack: Going back',
    ])
    expect(boardSections([], view())).toEqual([])
  })

  test('are counted for the sentence at the head', () => {
    expect(countsOf(boardSections(calls, view()))).toEqual({ noneFree: 1, waiting: 1, moving: 2, putBack: 1 })
  })

  test('show the chosen rooms only', () => {
    const elsewhere = call([item({ label: 'Elsewhere' })], { number: 5 })
    const rooms = new Set([elsewhere.room.id])
    expect(shown(boardSections([...calls, elsewhere], view({ roomIds: rooms })))).toEqual([
      'waiting: Elsewhere',
    ])
    expect(boardSections(calls, view({ roomIds: new Set() }))).toEqual([])
  })
})

describe('order in a group', () => {
  test('soonest needed first, stand by last, the older call first between equals', () => {
    const calls = [
      call([item({ label: 'Stand by' })], { kind: 'standby', neededAt: null }),
      call([item({ label: '11:10' })], { neededAt: instant('11:10') }),
      call([item({ label: '11:02 later' })], { calledAt: instant('10:42') }),
      call([item({ label: '11:02' })]),
    ]
    expect(shown(boardSections(calls, view()))).toEqual(['waiting: 11:02, 11:02 later, 11:10, Stand by'])
  })

  test('items of one call stay together, in walking order', () => {
    const calls = [
      call([item({ label: 'Far', walkOrder: 300 }), item({ label: 'Near', walkOrder: 20 })]),
      call([item({ label: 'Other', walkOrder: 100 })]),
    ]
    const order = shown(boardSections(calls, view()))[0]
    expect(['waiting: Near, Far, Other', 'waiting: Other, Near, Far']).toContain(order)
  })
})

describe('what nobody accepts comes forward', () => {
  const sooner = call([item({ label: 'Needed sooner' })], {
    neededAt: instant('10:46'),
    calledAt: instant('10:44'),
  })
  const forgotten = now('Now', '10:43')
  // 10:44:30 is 90 s after the call, 10:45 is 120 s after it.
  test.each([
    ['after 59 s it stands by its need', Date.parse('2026-06-02T10:43:59Z'), 'circulator', 0],
    ['after 60 s it stands first', Date.parse('2026-06-02T10:44:00Z'), 'circulator', 1],
    ['after 120 s it is still in its group for the nurse', at('10:45'), 'circulator', 2],
  ] as const)('%s', (_what, nowMs, role, level) => {
    const sections = boardSections([sooner, forgotten], view({ nowMs, role }))
    const row = sections[0]!.rows.find(({ item: one }) => one.label === 'Now')!
    expect(row.escalation).toBe(level)
    expect(sections.map(({ section }) => section)).toEqual(['waiting'])
    if (level > 0) expect(sections[0]!.rows[0]).toBe(row)
  })

  test('the charge nurse has it in a section of its own from 120 s, before everything else', () => {
    const short = call([item({ label: 'Short', hold: 'noneFree' })])
    const sections = boardSections([short, forgotten], view({ role: 'charge' }))
    expect(shown(sections)).toEqual(['forward: Now', 'noneFree: Short'])
    expect(countsOf(sections).waiting).toBe(1)
  })

  test('a call in a marked time-out does not come forward', () => {
    const quiet = view({ role: 'charge', quietCaseIds: new Set([forgotten.caseId]) })
    expect(boardSections([forgotten], quiet)[0]).toMatchObject({
      section: 'waiting',
      rows: [{ escalation: 0 }],
    })
  })

  test('further repeats do not shuffle what already stands first', () => {
    const older = now('Four minutes', '10:41')
    const newer = now('One minute', '10:44')
    expect(shown(boardSections([newer, older], view()))).toEqual(['waiting: Four minutes, One minute'])
    expect(boardSections([newer, older], view())[0]!.rows.map((row) => row.escalation)).toEqual([3, 1])
  })
})

describe('late', () => {
  test.each([
    ['a now call has its minute', now('Now', '10:44'), at('10:45'), false],
    ['then it is late', now('Now', '10:44'), at('10:45') + 1, true],
    ['a timed call is late at once', call([item()], { neededAt: instant('10:45') }), at('10:45') + 1, true],
    ['stand by never', call([item()], { kind: 'standby', neededAt: null }), at('23:59'), false],
  ])('%s', (_what, of, nowMs, want) => {
    expect(isLateRow(of, of.items[0]!, nowMs)).toBe(want)
  })
})

describe('one walk together', () => {
  const head = (order: number | null = 70) => item({ label: 'Head', walkOrder: order })
  const stem = (order: number | null = 190) => item({ label: 'Stem', walkOrder: order })
  const labels = (of: CallView) => oneWalk(of).map((one) => one.label)

  test.each<[string, CallView, string[]]>([
    ['near bins of one call, in walking order', call([stem(), head()]), ['Head', 'Stem']],
    ['as far apart as one walk goes', call([head(70), stem(320)]), ['Head', 'Stem']],
    ['further apart', call([head(70), stem(330)]), []],
    [
      'bins that follow each other',
      call([head(70), stem(300), item({ label: 'Glenoid', walkOrder: 500 })]),
      ['Head', 'Stem', 'Glenoid'],
    ],
    ['one of three too far', call([head(70), stem(190), item({ label: 'Femur', walkOrder: 900 })]), []],
    ['alone', call([head()]), []],
    ['without a place', call([head(), stem(null)]), []],
    [
      'one without a package: the rest go together',
      call([head(), stem(), item({ hold: 'noneFree' })]),
      ['Head', 'Stem'],
    ],
    ['one accepted already: only one is left', call([head(), item({ stage: 'accepted' })]), []],
    [
      'one in the room already',
      call([head(), item({ unit: unit({ zone: 'room', code: 'R3' }), walkOrder: 0 })]),
      [],
    ],
    [
      'core and loaner rack',
      call([head(), item({ unit: unit({ zone: 'loanerRack', code: 'LR-1' }), walkOrder: 90 })]),
      [],
    ],
  ])('%s', (_what, of, want) => {
    expect(labels(of)).toEqual(want)
  })

  test('is one block on the board; two calls of one room are two', () => {
    const together = call([head(), stem()])
    const alone = call([item({ label: 'Alone' })], { calledAt: instant('10:41') })
    const [waiting] = boardSections([together, alone], view())
    expect(blocksOf(waiting!.rows).map((block) => block.map((row) => row.item.label))).toEqual([
      ['Head', 'Stem'],
      ['Alone'],
    ])
  })
})
