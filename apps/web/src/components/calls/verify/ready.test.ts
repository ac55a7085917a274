import { expect, test } from 'vitest'
import { call, item, PIM, unit } from '../../../../test/calls'
import type { ReadLabel } from './label'
import { isCovered, missingFor, needsTwo, type Missing, type Verifying } from './ready'

const label: ReadLabel = {
  input: { scan: 'x' },
  gtin: '09521100100489',
  ref: null,
  hibc: null,
  lot: 'L26A014',
  serial: null,
  useByOn: '2028-11-30',
  typed: false,
  atMs: 0,
}
const IMPLANT = item({ stage: 'inRoom', unit: unit() })
const spoken: Verifying = {
  call: call([IMPLANT]),
  item: IMPLANT,
  label,
  differs: false,
  looked: true,
  method: 'spoken',
  checkerId: PIM.id,
  heard: { size: '50', side: 'either' },
  pin: '',
}
const CEMENT = item({ category: 'sterile', stage: 'inRoom', unit: unit() })
const alone = { item: CEMENT, checkerId: null, heard: null }

test.each<[string, Partial<Verifying>, Missing[]]>([
  ['everything is there, spoken', {}, []],
  ['everything is there, by PIN', { method: 'pin', heard: null, pin: '2402' }, []],
  ['one person is enough for what is sterile for one use', alone, []],
  ['one person is enough for a tray', { ...alone, item: item({ category: 'tray', stage: 'inRoom' }) }, []],
  ['the call was not read back', { call: call([IMPLANT], { readBack: null }) }, ['readBack']],
  ['no label was read', { label: null, heard: null }, ['label', 'heard']],
  ['something on the label differs', { differs: true }, ['labelDiffers']],
  ['the barcode bears no date', { label: { ...label, useByOn: null } }, ['useBy']],
  ['the barcode bears no lot', { label: { ...label, lot: null } }, ['lot']],
  ['nobody looked at the package', { looked: false }, ['intact']],
  ['nobody looked, and one person is enough', { ...alone, looked: false }, ['intact']],
  ['nobody checks', { checkerId: null }, ['checker']],
  ['nothing was keyed', { heard: null }, ['heard']],
  ['no PIN was keyed', { method: 'pin', heard: null }, ['pin']],
  ['what was heard does not stand for a PIN', { method: 'pin' }, ['pin']],
])('the button is on exactly when nothing is missing: %s', (_what, over, missing) => {
  expect(missingFor({ ...spoken, ...over })).toEqual(missing)
})

test.each<[string, Partial<Verifying>, boolean]>([
  ['before it is keyed', { heard: null }, true],
  ['once it is keyed', {}, false],
  ['before a label is read', { label: null, heard: null }, false],
  ['by PIN', { method: 'pin', heard: null }, false],
  ['where one person is enough', alone, false],
])('the label is covered %s: %o', (_what, over, covered) => {
  expect(isCovered({ ...spoken, ...over })).toBe(covered)
})

test('two people verify implants, and nothing else', () => {
  expect((['implant', 'sterile', 'tray'] as const).map((category) => needsTwo(item({ category })))).toEqual([
    true,
    false,
    false,
  ])
})
