import type { ItemView, LabelView } from '@bellpull/contracts'
import { describe, expect, test } from 'vitest'
import { at, call, instant, item, unit } from '../../../../test/calls'
import { fetchList } from './fetch-list'
import { matchScan } from './scan-match'

const GTIN = '09521100100489'
const OTHER = '09521100200059'
const label = (over: Partial<LabelView> = {}): LabelView => ({
  scheme: 'gs1',
  gtin: GTIN,
  lot: 'L1',
  useByOn: '2028-11-30',
  warnings: [],
  ...over,
})

/** One call for each item, needed at the time that stands before its name. */
const list = (...items: [neededAt: string, name: string, over: Partial<ItemView>][]) =>
  fetchList(
    items.map(([neededAt, name, over]) =>
      call([item({ label: name, ...over })], { neededAt: instant(neededAt) }),
    ),
    at('10:45'),
  )

const held = (lot: string, over: Parameters<typeof unit>[0] = {}): Partial<ItemView> => ({
  unit: unit({ gtin: GTIN, lot, ...over }),
})
const inHatch = (lot: string, over: Parameters<typeof unit>[0] = {}): Partial<ItemView> => ({
  ...held(lot, { code: 'Hatch', zone: 'hatch', ...over }),
  stage: 'pulled',
  pulledAt: instant('10:44'),
})
const goingBack = (lot: string): Partial<ItemView> => ({
  ...held(lot),
  stage: 'pulled',
  outcome: 'returned',
  putBack: { toCode: 'A1-7', since: instant('10:40'), inspect: false, walkOrder: 70 },
})

/** "pull Late, not Soon" */
const said = (of: LabelView, on: ReturnType<typeof list>): string => {
  const match = matchScan(of, on)
  if (match.kind === 'notOnTheList') return match.kind
  const others =
    match.kind === 'pull' ? match.others.map(({ item: one }) => `, not ${one.label}`).join('') : ''
  return `${match.kind} ${match.line.item.label}${others}`
}

describe('what a scanned label stands for', () => {
  test.each<[string, LabelView, ReturnType<typeof list>, string]>([
    ['the package held for a call', label(), list(['11:00', 'A', held('L1')]), 'pull A'],
    [
      'the held package before a more urgent call of the product',
      label(),
      list(['10:50', 'Urgent', held('L2')], ['11:00', 'Held', held('L1')]),
      'pull Held, not Urgent',
    ],
    [
      'serial decides between packages of one lot',
      label({ serial: '7' }),
      list(['10:50', 'Urgent', held('L1', { serial: '6' })], ['11:00', 'Seven', held('L1', { serial: '7' })]),
      'pull Seven, not Urgent',
    ],
    [
      'one lot without serial: the most urgent',
      label(),
      list(['11:00', 'Later', held('L1')], ['10:50', 'Sooner', held('L1')]),
      'pull Sooner, not Later',
    ],
    [
      'another lot of the product: the most urgent',
      label({ lot: 'L9' }),
      list(['11:00', 'Later', held('L1')], ['10:50', 'Sooner', held('L2')]),
      'pull Sooner, not Later',
    ],
    [
      'another serial of the lot: still the same product',
      label({ serial: '9' }),
      list(['11:00', 'A', held('L1', { serial: '1' })]),
      'pull A',
    ],
    [
      'a serial that the house has not noted',
      label({ serial: '9' }),
      list(['11:00', 'A', held('L1')]),
      'pull A',
    ],
    ['a label without lot', label({ lot: undefined }), list(['11:00', 'A', held('L1')]), 'pull A'],
    ['another product', label({ gtin: OTHER }), list(['11:00', 'A', held('L1')]), 'notOnTheList'],
    ['an empty list', label(), list(), 'notOnTheList'],
    [
      'an accepted item is still to be pulled',
      label(),
      list(['11:00', 'A', { ...held('L1'), stage: 'accepted' }]),
      'pull A',
    ],
    [
      'a package that stands in the room',
      label(),
      list(['11:00', 'A', held('L1', { code: 'R3', zone: 'room' })]),
      'pull A',
    ],
    ['lies in the hatch', label(), list(['11:00', 'A', inHatch('L1')]), 'pulledAlready A'],
    [
      'one of the lot in the hatch, another called: the called one',
      label(),
      list(['11:00', 'Hatch', inHatch('L1')], ['11:10', 'Called', held('L2')]),
      'pull Called',
    ],
    [
      'the serial of the one in the hatch',
      label({ serial: '5' }),
      list(
        ['11:00', 'Hatch', inHatch('L1', { serial: '5' })],
        ['11:10', 'Called', held('L2', { serial: '6' })],
      ),
      'pulledAlready Hatch',
    ],
    ['delivered already', label(), list(['11:00', 'A', { ...held('L1'), stage: 'inRoom' }]), 'notOnTheList'],
    ['a package on its way back', label(), list(['11:00', 'Back', goingBack('L1')]), 'putBack Back'],
    [
      'another lot than the one on its way back',
      label({ lot: 'L2' }),
      list(['11:00', 'Back', goingBack('L1')]),
      'notOnTheList',
    ],
    ['none free holds nothing', label(), list(['11:00', 'A', { hold: 'noneFree' }]), 'notOnTheList'],
    [
      'HIBC, by catalogue number',
      label({ scheme: 'hibc', gtin: undefined, lic: 'B123', product: 'slb-hd-50c' }),
      list(['11:00', 'A', held('L1')]),
      'pull A',
    ],
    [
      'HIBC, another number',
      label({ scheme: 'hibc', gtin: undefined, lic: 'B123', product: 'SLB-HD-52C' }),
      list(['11:00', 'A', held('L1')]),
      'notOnTheList',
    ],
  ])('%s', (_what, of, on, want) => {
    expect(said(of, on)).toBe(want)
  })
})

describe('the list', () => {
  const labels = (lines: readonly { item: ItemView }[]) => lines.map((line) => line.item.label)

  test('walks by bin, then by urgency', () => {
    const on = list(
      ['11:00', 'Far', { walkOrder: 300 }],
      ['11:05', 'Near, later', { walkOrder: 70 }],
      ['10:50', 'Near, sooner', { walkOrder: 70 }],
      ['10:46', 'Nearest', { walkOrder: 10 }],
    )
    expect(labels(on.walk)).toEqual(['Nearest', 'Near, sooner', 'Near, later', 'Far'])
  })

  test.each<[string, Partial<ItemView>, keyof ReturnType<typeof fetchList> | null]>([
    ['called', {}, 'walk'],
    ['accepted', { stage: 'accepted' }, 'walk'],
    ['held in the room', held('L1', { code: 'R3', zone: 'room' }), 'inTheRoom'],
    ['called in words', { category: 'other', hold: 'notStocked' }, 'withoutBin'],
    ['not kept by package', { category: 'sterile', hold: 'notStocked' }, 'withoutBin'],
    ['none free', { hold: 'noneFree' }, 'noneFree'],
    ['pulled', inHatch('L1'), 'hatch'],
    ['in the room', { stage: 'inRoom' }, null],
    ['opened', { stage: 'opened' }, null],
    ['put back', goingBack('L1'), 'putBacks'],
    ['cancelled on the shelf', { outcome: 'cancelled' }, null],
  ])('%s: %j stands in %s', (_what, over, want) => {
    const on = list(['11:00', 'A', over])
    const found = (Object.keys(on) as (keyof typeof on)[]).filter((name) => on[name].length > 0)
    expect(found).toEqual(want === null ? [] : [want])
  })

  test('the hatch shows first what has lain there longest', () => {
    const on = list(
      ['11:00', 'Second', { ...inHatch('L1'), pulledAt: instant('10:44') }],
      ['11:05', 'First', { ...inHatch('L1'), pulledAt: instant('10:41') }],
    )
    expect(labels(on.hatch)).toEqual(['First', 'Second'])
  })
})
