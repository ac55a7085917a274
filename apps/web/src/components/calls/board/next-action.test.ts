import type { CallView, ItemView } from '@bellpull/contracts'
import { ROLES, STAGES, type Role, type Stage } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { CASIMIR, IFEOMA, JORY, JUNIPER, PIM, TOBIAH, call, item } from '../../../../test/calls'
import {
  commandsHere,
  menuFor,
  nextAction,
  type ActionName,
  type Viewer,
  type WaitingFor,
} from './next-action'

const viewer = (role: Role): Viewer => ({ id: `viewer-${role}`, role })
const mine = (role: Role) => ({ id: `viewer-${role}`, role, name: 'The Viewer', initials: 'TV' })

/** What the button says, or in brackets what the row waits for. */
const said = (of: CallView, one: ItemView, who: Viewer): string => {
  const next = nextAction(of, one, who)
  return next.action ?? `(${next.waitingFor})`
}

type Cells = readonly [
  circulator: string,
  runner: string,
  core: string,
  charge: string,
  scrub: string,
  surgeon: string,
]
const COLUMNS: readonly Role[] = ['circulator', 'runner', 'core', 'charge', 'scrub', 'surgeon']

describe('the next thing to do, for each role', () => {
  test.each<[string, Partial<ItemView>, Partial<CallView>, Cells]>([
    ['called', {}, {}, ['accept', 'accept', 'accept', 'accept', '(accept)', '(accept)']],
    [
      'called, not read back',
      {},
      { readBack: null },
      ['readBack', 'accept', 'accept', 'readBack', 'readBack', '(accept)'],
    ],
    ['none free', { hold: 'noneFree' }, {}, ['facts', 'facts', 'facts', 'facts', 'facts', 'facts']],
    [
      'accepted by another',
      { stage: 'accepted', acceptedBy: TOBIAH },
      {},
      ['takeOver', 'takeOver', 'takeOver', 'takeOver', '(fetch)', '(fetch)'],
    ],
    [
      'pulled by a nurse',
      { stage: 'pulled', acceptedBy: TOBIAH },
      {},
      ['takeOver', 'takeOver', 'takeOver', 'takeOver', '(fetch)', '(fetch)'],
    ],
    [
      'pulled by the core, in the hatch',
      { stage: 'pulled', acceptedBy: CASIMIR },
      {},
      ['deliver', 'deliver', 'takeOver', 'deliver', '(fetch)', '(fetch)'],
    ],
    [
      'in the room',
      { stage: 'inRoom', acceptedBy: JORY },
      {},
      ['verify', '(check)', '(check)', 'verify', '(check)', '(check)'],
    ],
    [
      'in the room, not read back',
      { stage: 'inRoom' },
      { readBack: null },
      ['readBack', '(readBack)', '(readBack)', 'readBack', 'readBack', '(readBack)'],
    ],
    [
      'verified',
      { stage: 'verified' },
      {},
      ['open', '(opening)', '(opening)', 'open', '(opening)', '(opening)'],
    ],
    [
      'opened',
      { stage: 'opened' },
      {},
      ['implant', '(outcome)', '(outcome)', 'implant', 'implant', '(outcome)'],
    ],
    [
      'cement opened',
      { stage: 'opened', category: 'sterile' },
      {},
      ['use', '(outcome)', '(outcome)', 'use', 'use', '(outcome)'],
    ],
    [
      'called in words, in the room',
      { stage: 'inRoom', category: 'other', hold: 'notStocked' },
      {},
      ['use', '(outcome)', '(outcome)', 'use', 'use', '(outcome)'],
    ],
    [
      'a put-back',
      {
        stage: 'pulled',
        outcome: 'returned',
        putBack: { toCode: 'A1-7', since: '2026-06-02T10:50:00.000Z', inspect: false, walkOrder: 70 },
      },
      {},
      ['shelve', 'shelve', 'shelve', 'shelve', '(shelving)', '(shelving)'],
    ],
  ])('%s', (_what, one, of, cells) => {
    const made = call([item(one)], of)
    expect(COLUMNS.map((role) => said(made, made.items[0]!, viewer(role)))).toEqual(cells)
  })

  test.each<[Stage, Role, string]>([
    ['accepted', 'circulator', 'pull'],
    ['accepted', 'runner', 'pull'],
    ['accepted', 'core', 'pull'],
    ['pulled', 'runner', 'deliver'],
    ['pulled', 'core', 'deliver'],
    ['pulled', 'charge', 'deliver'],
  ])('who has it, %s, %s: %s', (stage, role, want) => {
    const made = call([item({ stage, acceptedBy: mine(role) })])
    expect(said(made, made.items[0]!, viewer(role))).toBe(want)
  })

  test('what was called in words has nothing to pull: who has it delivers it', () => {
    const made = call([
      item({ stage: 'accepted', category: 'other', hold: 'notStocked', acceptedBy: mine('runner') }),
    ])
    expect(said(made, made.items[0]!, viewer('runner'))).toBe('deliver')
  })

  test('who called it does not read it back, and does not verify before somebody has', () => {
    const made = call([item({ stage: 'inRoom' })], { readBack: null, calledBy: PIM })
    expect(said(made, made.items[0]!, PIM)).toBe('(readBack)')
    expect(said(made, made.items[0]!, IFEOMA)).toBe('readBack')
    expect(commandsHere(made, made.items[0]!, IFEOMA)).not.toContain('verify')
  })

  test('the coordinator and the administrator watch: nothing but facts and put-backs', () => {
    for (const role of ['coordinator', 'admin'] as const)
      for (const stage of STAGES) {
        const made = call([item({ stage })], { readBack: null })
        expect(nextAction(made, made.items[0]!, viewer(role)).action).toBeNull()
      }
  })
})

describe('the menu of a row', () => {
  test.each<[string, Partial<ItemView>, Partial<CallView>, Role, readonly ActionName[]]>([
    ['called', {}, {}, 'circulator', ['pull', 'cancel']],
    ['called, not read back', {}, { readBack: null }, 'circulator', ['accept', 'pull', 'cancel']],
    ['early, read back', {}, { kind: 'early' }, 'circulator', ['confirm', 'pull', 'cancel']],
    ['early, not read back', {}, { kind: 'early', readBack: null }, 'surgeon', ['cancel']],
    ['none free', { hold: 'noneFree' }, {}, 'circulator', ['cancel']],
    ['another’s', { stage: 'accepted', acceptedBy: TOBIAH }, {}, 'runner', ['pull']],
    ['mine', { stage: 'accepted', acceptedBy: mine('runner') }, {}, 'runner', ['decline']],
    [
      'in the room',
      { stage: 'inRoom', acceptedBy: JORY },
      {},
      'circulator',
      ['putBack', 'cancel', 'takeOver'],
    ],
    ['opened', { stage: 'opened' }, {}, 'scrub', ['notImplanted']],
    ['the core sees no put-back', { stage: 'pulled', acceptedBy: JORY }, {}, 'core', ['deliver']],
  ])('%s, for %s %s %s: %j', (_what, one, of, role, want) => {
    const made = call([item(one)], of)
    expect(menuFor(made, made.items[0]!, viewer(role), false)).toEqual(want)
  })

  test('undo stands there only for one’s own last step', () => {
    const made = call([item({ stage: 'accepted', acceptedBy: mine('runner') })])
    expect(menuFor(made, made.items[0]!, viewer('runner'), true)).toEqual(['decline', 'undo'])
  })

  test('the whole call is cancelled at once only while nothing of it is opened', () => {
    const two = call([item(), item()])
    expect(menuFor(two, two.items[0]!, viewer('circulator'), false)).toContain('cancelCall')
    const opened = call([item(), item({ stage: 'opened' })])
    expect(menuFor(opened, opened.items[0]!, viewer('circulator'), false)).not.toContain('cancelCall')
    const alone = call([item()])
    expect(menuFor(alone, alone.items[0]!, viewer('circulator'), false)).not.toContain('cancelCall')
  })

  test('the next thing to do never stands in the menu as well', () => {
    for (const role of ROLES)
      for (const stage of STAGES)
        for (const readBack of [null, { by: TOBIAH, at: '2026-06-02T10:40:00.000Z' }]) {
          const made = call([item({ stage, acceptedBy: JORY }), item()], { readBack, calledBy: JUNIPER })
          const next = nextAction(made, made.items[0]!, viewer(role))
          expect(menuFor(made, made.items[0]!, viewer(role), true)).not.toContain(next.action)
        }
  })
})

test('every word for waiting is used by some row', () => {
  const words = new Set<WaitingFor | null>()
  for (const role of ROLES)
    for (const stage of STAGES)
      for (const outcome of [null, 'returned'] as const)
        for (const readBack of [null, { by: TOBIAH, at: '2026-06-02T10:40:00.000Z' }]) {
          const made = call([item({ stage, outcome })], { readBack })
          words.add(nextAction(made, made.items[0]!, viewer(role)).waitingFor)
        }
  expect([...words].sort()).toEqual(
    [null, 'accept', 'fetch', 'readBack', 'check', 'opening', 'outcome', 'shelving'].sort(),
  )
})
