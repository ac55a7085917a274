import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { gs1CheckDigit } from './gtin.js'
import { hibcCheckCharacter } from './hibc.js'
import { LABEL_REFUSALS } from './label.js'
import { parseScan } from './scan.js'

const TODAY = '2026-12-01'
const GS = '\u001d'
const SET_82 = [...'!"%&\'()*+,-./0123456789:;<=>?ABCDEFGHIJKLMNOPQRSTUVWXYZ_abcdefghijklmnopqrstuvwxyz']

const text = (characters: readonly string[], max: number) =>
  fc.array(fc.constantFrom(...characters), { minLength: 1, maxLength: max }).map((all) => all.join(''))
const gtin = fc
  .array(fc.integer({ min: 0, max: 9 }), { minLength: 13, maxLength: 13 })
  .map((all) => `${all.join('')}${gs1CheckDigit(all.join(''))}`)
/** Days from 49 years back to 50 ahead of 2026, the whole window of the century rule. */
const day = fc
  .integer({ min: Date.UTC(1977, 0, 1) / 86_400_000, max: Date.UTC(2076, 11, 31) / 86_400_000 })
  .map((days) => new Date(days * 86_400_000).toISOString().slice(0, 10))
const yymmdd = (iso: string) => iso.slice(2).replaceAll('-', '')
// The one text that is read as a separator, see parseScan.
const value = text(SET_82, 20).filter((one) => !one.includes('<GS>'))

interface Contents {
  gtin: string
  lot: string
  serial: string
  useByOn: string
  madeOn: string
}
const contents: fc.Arbitrary<Contents> = fc.record({
  gtin,
  lot: value,
  serial: value,
  useByOn: day,
  madeOn: day,
})

const elementsOf = (one: Contents): [ai: string, value: string][] => [
  ['01', one.gtin],
  ['10', one.lot],
  ['21', one.serial],
  ['17', yymmdd(one.useByOn)],
  ['11', yymmdd(one.madeOn)],
]
/** Elements in the order given by `keys`. */
const shuffled = (one: Contents, keys: readonly number[]) =>
  elementsOf(one)
    .map((element, index) => ({ element, key: keys[index] ?? 0 }))
    .sort((a, b) => a.key - b.key)
    .map(({ element }) => element)
const order = fc.array(fc.nat(), { minLength: 5, maxLength: 5 })
const open = (ai: string) => ai === '10' || ai === '21'
const asScan = (elements: readonly [string, string][]) =>
  elements.map(([ai, data]) => `${ai}${data}${open(ai) ? GS : ''}`).join('')
const asText = (elements: readonly [string, string][]) =>
  elements.map(([ai, data]) => `(${ai})${data.replaceAll('(', '\\(')}`).join('')
const asLink = (one: Contents) => {
  const e = encodeURIComponent
  const path = `01/${one.gtin}/10/${e(one.lot)}/21/${e(one.serial)}`
  return `https://example.com/${path}?17=${yymmdd(one.useByOn)}&11=${yymmdd(one.madeOn)}`
}
const labelOf = (one: Contents) => ({
  ok: true,
  label: { scheme: 'gs1', ...one, warnings: one.useByOn < one.madeOn ? ['use-by-before-made'] : [] },
})

describe('any legal GS1 label', () => {
  test('is read back from an element string, in any order of its elements', () => {
    fc.assert(
      fc.property(
        contents,
        order,
        fc.constantFrom('', ']d2', ']C1', ']Q3', ']e0', ']J1'),
        (one, keys, id) => {
          expect(parseScan(`${id}${asScan(shuffled(one, keys))}`, TODAY)).toEqual(labelOf(one))
        },
      ),
    )
  })

  test('is read back from bracketed text', () => {
    // A backslash is in no value, and one before a bracket says that the bracket is data.
    fc.assert(
      fc.property(contents, order, (one, keys) => {
        expect(parseScan(asText(shuffled(one, keys)), TODAY)).toEqual(labelOf(one))
      }),
    )
  })

  test('is read back from a Digital Link', () => {
    fc.assert(
      fc.property(contents, (one) => {
        expect(parseScan(asLink(one), TODAY)).toEqual(labelOf(one))
      }),
    )
  })

  test('is read back from two barcodes, wherever it is parted', () => {
    fc.assert(
      fc.property(contents, order, fc.integer({ min: 1, max: 4 }), (one, keys, at) => {
        const elements = shuffled(one, keys)
        const pair = [`]C1${asScan(elements.slice(0, at))}`, `]C1${asScan(elements.slice(at))}`] as const
        expect(parseScan(pair, TODAY)).toEqual(labelOf(one))
      }),
    )
  })

  test('is refused for its check digit when any one digit of its GTIN is changed, in every form', () => {
    const by = fc.integer({ min: 1, max: 9 })
    fc.assert(
      fc.property(contents, fc.integer({ min: 0, max: 13 }), by, (one, at, more) => {
        const digit = (Number(one.gtin[at]) + more) % 10
        const changed = { ...one, gtin: `${one.gtin.slice(0, at)}${digit}${one.gtin.slice(at + 1)}` }
        for (const scan of [asScan(elementsOf(changed)), asText(elementsOf(changed)), asLink(changed)]) {
          expect(parseScan(scan, TODAY)).toMatchObject({ ok: false, reason: 'check-digit' })
        }
      }),
    )
  })

  test('with an EAN-13 named by the scanner: any one digit changed is refused', () => {
    const digits = fc.array(fc.integer({ min: 0, max: 9 }), { minLength: 12, maxLength: 12 })
    fc.assert(
      fc.property(digits, fc.integer({ min: 0, max: 12 }), fc.integer({ min: 1, max: 9 }), (body, at, by) => {
        const good = `${body.join('')}${gs1CheckDigit(body.join(''))}`
        const bad = `${good.slice(0, at)}${(Number(good[at]) + by) % 10}${good.slice(at + 1)}`
        expect(parseScan(`]E0${good}`, TODAY)).toMatchObject({ ok: true, label: { gtin: `0${good}` } })
        expect(parseScan(`]E0${bad}`, TODAY)).toMatchObject({ ok: false, reason: 'check-digit' })
      }),
    )
  })
})

describe('any legal HIBC label', () => {
  const LETTERS = [...'ABCDEFGHIJKLMNOPQRSTUVWXYZ']
  const ALNUM = [...'0123456789', ...LETTERS]
  const product = fc.record({
    lic: fc.tuple(fc.constantFrom(...LETTERS), text(ALNUM, 3)).map(([a, b]) => `${a}${b.padEnd(3, '0')}`),
    product: text(ALNUM, 18),
    lot: text(ALNUM, 18),
    serial: text(ALNUM, 18),
    useByOn: day,
    madeOn: day,
  })
  const unit = fc.integer({ min: 0, max: 9 })
  const checked = (data: string) => data + hibcCheckCharacter(data)

  test('is read back, in one barcode and in two', () => {
    fc.assert(
      fc.property(product, unit, (one, unitOfMeasure) => {
        const { useByOn, madeOn, serial } = one
        const primary = `+${one.lic}${one.product}${unitOfMeasure}`
        const more = `$$3${yymmdd(useByOn)}${one.lot}/S${serial}/16D${madeOn.replaceAll('-', '')}`
        const expected = {
          ok: true,
          label: { scheme: 'hibc', ...one, warnings: useByOn < madeOn ? ['use-by-before-made'] : [] },
        }
        expect(parseScan(checked(`${primary}/${more}`), TODAY)).toEqual(expected)
        const second = checked(`+${more}${hibcCheckCharacter(primary)}`)
        expect(parseScan([checked(primary), second], TODAY)).toEqual(expected)
      }),
    )
  })
})

describe('anything else', () => {
  test('is refused by one of the names and with a sentence, and nothing is ever thrown', () => {
    const scanLike = fc.oneof(
      fc.string(),
      fc.string({ unit: 'binary' }),
      text([...'0127+$/()]dC=.:% ', GS], 40),
      contents
        .map((one) => asScan(elementsOf(one)))
        .chain((scan) => fc.nat(scan.length).map((n) => scan.slice(0, n))),
    )
    fc.assert(
      fc.property(fc.oneof(scanLike, fc.tuple(scanLike, scanLike)), (scan) => {
        const result = parseScan(scan, TODAY)
        if (result.ok) return
        expect(LABEL_REFUSALS).toContain(result.reason)
        expect(result.detail).toMatch(/\.$/)
      }),
      { numRuns: 2_000 },
    )
  })
})
