import { describe, expect, test } from 'vitest'
import type { Role } from '@bellpull/domain'
import type { ItemView } from '@bellpull/contracts'
import { aCall, anItem, id } from '../../../../test/views'
import { commandsHere, lastCallOf, rowsOfCase, shortName } from './case-rows'
import { tilesOf } from './tiles'

describe('what may be done here with an item', () => {
  test.each([
    { stage: 'called', role: 'scrub', may: ['cancel'] },
    { stage: 'inRoom', role: 'scrub', may: ['putBack'] },
    { stage: 'inRoom', role: 'surgeon', may: ['cancel'] },
    { stage: 'opened', role: 'scrub', may: ['implant', 'notImplanted'] },
    { stage: 'opened', role: 'surgeon', may: [] },
    { stage: 'verified', role: 'circulator', may: ['putBack'] },
    { stage: 'pulled', role: 'runner', may: ['putBack'] },
  ] as { stage: ItemView['stage']; role: Role; may: string[] }[])(
    '$stage, $role: $may',
    ({ stage, role, may }) => {
      expect(commandsHere(anItem({ stage }), role)).toEqual(may)
    },
  )

  test('a tray is used, not implanted', () => {
    expect(commandsHere(anItem({ stage: 'opened', category: 'tray' }), 'scrub')).toEqual([
      'use',
      'notImplanted',
    ])
  })
})

describe('the last call', () => {
  const older = aCall({ id: id(1), calledAt: '2026-12-01T10:00:00Z', items: [anItem()] })
  const now = Date.parse('2026-12-01T10:20:00Z')
  test.each([
    { what: 'is the newest with something wanted', newest: [anItem()], last: id(2) },
    { what: 'is not one that lies open on the table', newest: [anItem({ stage: 'opened' })], last: id(1) },
    {
      what: 'stays while it can be brought back',
      newest: [anItem({ outcome: 'cancelled', settledAt: '2026-12-01T10:19:00Z' })],
      last: id(2),
    },
    {
      what: 'goes when it cannot',
      newest: [anItem({ outcome: 'cancelled', settledAt: '2026-12-01T10:17:00Z' })],
      last: id(1),
    },
  ])('$what', ({ newest, last }) => {
    const calls = [older, aCall({ id: id(2), calledAt: '2026-12-01T10:16:00Z', items: newest })]
    expect(lastCallOf(calls, now)?.id).toBe(last)
  })

  test('there is none where nothing was called', () => {
    expect(lastCallOf([], now)).toBeNull()
  })
})

describe('rows', () => {
  const cement = { category: 'sterile', label: 'Bone cement 40 g', variant: 'standard', size: '40' } as const
  test('what is called in number stands once, as long as it goes the same way', () => {
    const call = aCall({
      items: [
        anItem({ id: id(11), ...cement }),
        anItem({ id: id(12), ...cement }),
        anItem({ id: id(13), ...cement, stage: 'accepted' }),
        anItem({ id: id(14) }),
        anItem({ id: id(15) }),
      ],
    })
    expect(rowsOfCase([call]).open.map(({ items }) => items.length)).toEqual([2, 1, 1, 1])
  })

  test('settled ones stand apart, the latest first', () => {
    const call = aCall({
      items: [
        anItem({ id: id(11), outcome: 'implanted', settledAt: '2026-12-01T10:00:00Z' }),
        anItem({ id: id(12) }),
        anItem({ id: id(13), outcome: 'cancelled', settledAt: '2026-12-01T10:05:00Z' }),
      ],
    })
    const { open, settled } = rowsOfCase([call])
    expect(open.map(({ key }) => key)).toEqual([id(12)])
    expect(settled.map(({ key }) => key)).toEqual([id(13), id(11)])
  })

  test.each([
    {
      what: 'head and stem, head first',
      items: [{ kind: 'stem', label: 'Stem 9', size: '9', variant: null }, {}],
      sizes: ['50', '9'],
    },
    { what: 'a range in one tile', items: [{ label: 'Head 48', size: '48' }, {}], sizes: ['48, 50'] },
    { what: 'a number before what it counts', items: [cement, cement], sizes: ['2 × Bone cement 40 g'] },
  ] as { what: string; items: Partial<ItemView>[]; sizes: string[] }[])(
    'tiles: $what',
    ({ items, sizes }) => {
      const given = items.map((item, at) => anItem({ id: id(20 + at), kind: 'head', size: '50', ...item }))
      expect(tilesOf(given).map(({ size }) => size)).toEqual(sizes)
    },
  )
})

test('a name short enough to call across a room', () => {
  expect(shortName('Jory Penhallick')).toBe('J. Penhallick')
})
