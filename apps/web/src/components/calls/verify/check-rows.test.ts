import type { CallView, ItemView } from '@bellpull/contracts'
import { describe, expect, test } from 'vitest'
import { call, item, unit } from '../../../../test/calls'
import { checkRows, hasDifference, type CheckState, type Partner, type RowKey } from './check-rows'
import type { ReadLabel } from './label'

const TODAY = '2026-06-02'
const UNIT = { lot: 'L26A014', serial: '000731', useByOn: '2028-11-30', gtin: '09521100100489' }

const read = (over: Partial<ReadLabel> = {}): ReadLabel => ({
  input: { scan: 'x' },
  gtin: UNIT.gtin,
  ref: null,
  hibc: null,
  lot: UNIT.lot,
  serial: UNIT.serial,
  useByOn: UNIT.useByOn,
  typed: false,
  atMs: 0,
  ...over,
})
const typed = (over: Partial<ReadLabel> = {}): ReadLabel =>
  read({ gtin: null, ref: 'slb-hd-50c', typed: true, lot: 'l26a014', ...over })

interface Given {
  readonly label?: ReadLabel | null
  readonly item?: Partial<ItemView>
  readonly call?: Partial<CallView>
  readonly state?: Partial<CheckState>
}
function rowsOf({ label = read(), item: over = {}, call: of = {}, state = {} }: Given) {
  const one = item({ stage: 'inRoom', unit: unit(UNIT), ...over })
  return checkRows({
    call: call([one], of),
    item: one,
    label,
    covered: false,
    looked: false,
    today: TODAY,
    partners: [],
    nameOfGtin: () => null,
    timeOf: (at) => at.slice(11, 16),
    ...state,
  })
}
const rowOf = (key: RowKey, given: Given) => rowsOf(given).find((row) => row.key === key)!
const said = (key: RowKey, given: Given): string => {
  const { mark, says } = rowOf(key, given)
  return `${mark}: ${says}`
}

describe('what each row says', () => {
  test.each<[RowKey, string, Given, string]>([
    ['part', 'of the right label', {}, 'agrees: same'],
    ['part', 'of another product', { label: read({ gtin: '09521100100496' }) }, 'differs: differs'],
    ['part', 'of a typed REF, capitals or not', { label: typed() }, 'agrees: same'],
    ['part', 'of another typed REF', { label: typed({ ref: 'SLB-HD-52C' }) }, 'differs: differs'],
    [
      'part',
      'of a label that this screen cannot look up',
      { label: read({ gtin: null, hibc: 'A999 50C' }) },
      'notRun: houseCompares',
    ],
    [
      'part',
      'of what is not kept by package',
      { item: { unit: null, hold: 'notStocked' } },
      'notRun: houseCompares',
    ],
    ['part', 'before a label was read', { label: null }, 'notRun: notYet'],

    ['side', 'for a part that fits either side', {}, 'agrees: fits'],
    ['side', 'for a part of the case’s side', { item: { side: 'left' } }, 'agrees: same'],
    ['side', 'for a part of the other side', { item: { side: 'right' } }, 'differs: otherSide'],
    [
      'side',
      'on the label of another product',
      { label: read({ gtin: '09521100100496' }) },
      'notRun: houseCompares',
    ],

    ['ref', 'of the right label', {}, 'agrees: same'],
    ['ref', 'of another product', { label: read({ gtin: '09521100100496' }) }, 'differs: differs'],

    ['useBy', 'well in date', {}, 'agrees: inDate'],
    [
      'useBy',
      'on the last day',
      { label: read({ useByOn: TODAY }), item: { unit: unit({ ...UNIT, useByOn: TODAY }) } },
      'agrees: inDate',
    ],
    ['useBy', 'one day too old', { label: read({ useByOn: '2026-06-01' }) }, 'differs: expired'],
    [
      'useBy',
      'not as the record has it',
      { label: read({ useByOn: '2029-01-31' }) },
      'differs: recordDiffers',
    ],
    [
      'useBy',
      'of another package than the one pulled',
      { label: read({ lot: 'X', useByOn: '2029-01-31' }) },
      'agrees: inDate',
    ],
    ['useBy', 'when the barcode bears none', { label: read({ useByOn: null }) }, 'notRun: notOnLabel'],

    ['lot', 'as pulled', {}, 'agrees: same'],
    ['lot', 'as pulled, typed in small letters', { label: typed() }, 'agrees: same'],
    [
      'lot',
      'scanned in small letters, which is another lot',
      { label: read({ lot: 'l26a014' }) },
      'differs: differs',
    ],
    ['lot', 'of another package', { label: read({ lot: 'L26A015' }) }, 'differs: differs'],
    ['lot', 'with another serial number', { label: read({ serial: '000732' }) }, 'differs: differs'],
    ['lot', 'when the label bears no serial number', { label: read({ serial: null }) }, 'agrees: same'],
    [
      'lot',
      'when the barcode bears neither',
      { label: read({ lot: null, serial: null }) },
      'notRun: notOnLabel',
    ],

    ['package', 'before anybody looked', {}, 'notRun: notYet'],
    ['package', 'when somebody looked', { state: { looked: true } }, 'agrees: looked'],
  ])('%s %s', (key, _what, given, want) => {
    expect(said(key, given)).toBe(want)
  })

  test('another product is named where the screen knows it, and never shown as the size called', () => {
    const other = { label: read({ gtin: '09521100100496' }) }
    expect(rowOf('part', other).label).toEqual({ as: 'words', key: 'verify.label.other', named: {} })
    const named = { ...other, state: { nameOfGtin: () => 'Head 52 concentric' } }
    expect(rowOf('part', named).label).toMatchObject({ named: { name: 'Head 52 concentric' } })
  })
})

describe('pairs', () => {
  const partner = (result: Partner['result'], over: Partial<ItemView> = {}): Partner => ({
    item: item({ label: 'Stem 9', variant: null, kind: 'stem', ...over }),
    result,
  })
  test.each<[Partner['result'], string]>([
    ['notChecked', 'notRun: notChecked'],
    ['open', 'notRun: open'],
    ['fits', 'agrees: pairFits'],
    ['mismatch', 'differs: pairMismatch'],
  ])('%s says %s', (result, want) => {
    expect(said('pair', { state: { partners: [partner(result)] } })).toBe(want)
  })

  test.each<[Partial<ItemView>, string]>([
    [{}, 'verify.partner.called'],
    [{ verifiedAt: '2026-06-02T11:20:00.000Z' }, 'verify.partner.verified'],
    [
      { verifiedAt: '2026-06-02T11:20:00.000Z', openedAt: '2026-06-02T11:25:00.000Z' },
      'verify.partner.opened',
    ],
    [{ outcome: 'implanted' }, 'verify.partner.implanted'],
  ])('each partner by name, and how it stands: %o', (over, key) => {
    const row = rowOf('pair', { state: { partners: [partner('notChecked', over)] } })
    expect(row.partner).toBe('stem 9')
    expect(row.called).toMatchObject({ key })
  })
})

describe('while what was heard has not been keyed', () => {
  const covered = { state: { covered: true } }
  test('nothing of the label is there, and nothing is ticked', () => {
    const rows = rowsOf(covered).filter(({ key }) => key !== 'package')
    expect(rows).toHaveLength(5)
    for (const row of rows)
      expect(row).toMatchObject({ label: { as: 'covered' }, mark: 'notRun', says: 'covered' })
  })
  test('not even what differs', () => {
    expect(hasDifference(rowsOf({ ...covered, label: read({ lot: 'X' }) }))).toBe(false)
  })
})

test.each<[string, Given, boolean]>([
  ['the right label', {}, false],
  ['no label', { label: null }, false],
  ['another lot', { label: read({ lot: 'X' }) }, true],
  ['an expired package', { label: read({ useByOn: '2026-06-01' }) }, true],
  ['a part of the other side', { item: { side: 'right' } }, true],
])('%s differs: %o', (_what, given, differs) => {
  expect(hasDifference(rowsOf(given))).toBe(differs)
})
