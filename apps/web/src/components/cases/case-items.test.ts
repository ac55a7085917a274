import type { EventView, ItemView } from '@bellpull/contracts'
import { expect, test } from 'vitest'
import { call, IFEOMA, instant, item, JORY, PIM } from '../../../test/calls'
import { groupsOf, implantedOf, unsettledOf } from './case-items'
import { stepsOf } from './item-steps'

const one = (label: string, outcome: ItemView['outcome'] = null): ItemView =>
  item({ label, variant: null, outcome })
const calls = [
  call([one('Head 50', 'implanted'), one('Stem 9')], { calledAt: instant('10:40') }),
  call([one('Tray', 'used')], { calledAt: instant('10:50') }),
  call([one('Glenoid M')], { calledAt: instant('10:45') }),
]
const labels = (items: readonly { label: string }[]) => items.map(({ label }) => label).join(' ')

test('calls with something unsettled come first, the newest of them before; what is unsettled leads its call', () => {
  expect(groupsOf(calls).map(({ items, unsettled }) => `${labels(items)}: ${unsettled}`)).toEqual([
    'Glenoid M: 1',
    'Stem 9 Head 50: 1',
    'Tray: 0',
  ])
})

test('what has no outcome, and what stays with the patient, in the order in which it was called', () => {
  expect(unsettledOf(calls).map((row) => row.item.label)).toEqual(['Stem 9', 'Glenoid M'])
  expect(implantedOf(calls).map((row) => row.item.label)).toEqual(['Head 50'])
})

let seq = 0
const event = (
  type: string,
  actor = IFEOMA,
  data: Record<string, unknown> = {},
  itemId = 'i',
): EventView => ({
  id: `r.${(seq += 1)}`,
  at: instant('10:46'),
  type: `item.${type}`,
  caseId: 'c',
  callId: 'k',
  itemId,
  roomId: 'r',
  actor,
  data,
})
const told = (...events: EventView[]) =>
  stepsOf(events, 'i').map(({ step, who }) => `${step} ${who.split(' ')[0]}`)

test.each<[string, EventView[], string[]]>([
  [
    'each step with who took it',
    [
      event('accepted', JORY),
      event('pulled', JORY),
      event('delivered', JORY),
      event('verified'),
      event('opened'),
      event('implanted'),
    ],
    ['accepted Jory', 'pulled Jory', 'inRoom Jory', 'verified Ifeoma', 'opened Ifeoma', 'settled Ifeoma'],
  ],
  ['who took it over', [event('accepted', JORY), event('takenOver')], ['accepted Ifeoma']],
  ['not what was given back', [event('accepted', JORY), event('declined', JORY)], []],
  ['not what was taken back', [event('pulled', JORY), event('undone', JORY, { command: 'pull' })], []],
  [
    'what was done again after it',
    [event('verified', PIM), event('undone', PIM, { command: 'verify' }), event('verified')],
    ['verified Ifeoma'],
  ],
  [
    'only what came after a rejected package',
    [event('pulled', JORY), event('rejected'), event('pulled')],
    ['pulled Ifeoma'],
  ],
  ['nothing of another item', [event('pulled', JORY, {}, 'other')], []],
])('the case shows %s', (_what, events, want) => {
  expect(told(...events)).toEqual(want)
})

test('verified names the second person and how', () => {
  const [step] = stepsOf([event('verified', IFEOMA, { checkedBy: PIM.id, method: 'pin' })], 'i')
  expect(step?.second).toEqual({ personId: PIM.id, how: 'pin' })
})
