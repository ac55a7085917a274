import type { ItemView } from '@bellpull/contracts'
import { expect, test } from 'vitest'
import { call, CALLED_AT, IFEOMA, item, JORY, JUNIPER, MAGDA, PIM } from '../../../../test/calls'
import { checkersOf } from './checkers'
import { nextAfter, queueOf } from './queue'

const one = (label: string, over: Partial<ItemView> = {}): ItemView =>
  item({ label, variant: null, stage: 'inRoom', ...over })
const rows = (items: ItemView[], over: Parameters<typeof call>[1] = {}) => {
  const of = call(items, over)
  return of.items.map((each) => ({ call: of, item: each }))
}

const board = [
  ...rows([one('Stem 9'), one('Cup 50', { stage: 'pulled' })], { calledAt: '2026-06-02T10:50:00.000Z' }),
  ...rows(
    [
      one('Head 50', { stage: 'verified' }),
      one('Tray', { stage: 'opened', category: 'tray' }),
      one('A stool', { category: 'other', unit: null, hold: 'notStocked' }),
      one('Head 48', { stage: 'opened', outcome: 'implanted' }),
    ],
    { calledAt: CALLED_AT },
  ),
  ...rows([one('Femur 5')], { number: 4 }),
]

test('what waits in the room: in the order in which it was called, without what needs no check or has ended', () => {
  expect(queueOf(board, 3).map((row) => row.item.label)).toEqual(['Head 50', 'Tray', 'Stem 9'])
})

test('the next is what is still to verify, after this one and then from the beginning', () => {
  const queue = queueOf(board, 3)
  expect(nextAfter(queue, queue[0]!.item.id)?.item.label).toBe('Stem 9')
  expect(nextAfter(queue, queue[2]!.item.id)).toBeNull()
})

test('who may be the second person: of a role that checks, never the first, the team before the others', () => {
  const team = [JUNIPER, PIM, IFEOMA]
  const checkers = checkersOf(team, [...team, MAGDA, JORY], IFEOMA.id)
  expect(checkers.team.map(({ name }) => name)).toEqual([JUNIPER.name, PIM.name])
  expect(checkers.others.map(({ name }) => name)).toEqual([MAGDA.name])
})
