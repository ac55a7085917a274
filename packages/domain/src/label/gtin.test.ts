import { gtin as oracle } from 'cdigit'
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { from, readVectors, type Sourced } from '../../test/read-vectors.js'
import { gs1CheckDigit, hasGs1CheckDigit, toGtin14 } from './gtin.js'

interface GtinVectors {
  check_digits: ({ number: string; computed: number; valid: boolean } & Sourced)[]
  gtin_to_14: ({ input: string; type: string; gtin14: string } & Sourced)[]
}
const vectors = readVectors<GtinVectors>('gs1')
const checked = vectors.check_digits.map((row) => ({ ...row, source: from(row) }))

const digits = (min: number, max: number) =>
  fc.array(fc.integer({ min: 0, max: 9 }), { minLength: min, maxLength: max }).map((all) => all.join(''))

describe('gs1CheckDigit', () => {
  test.each(checked)('check digit of $number computes to $computed, so valid is $valid ($source)', (row) => {
    expect(gs1CheckDigit(row.number.slice(0, -1))).toBe(row.computed)
    expect(hasGs1CheckDigit(row.number)).toBe(row.valid)
  })

  test('agrees with an independent library on any digits (cdigit)', () => {
    fc.assert(
      fc.property(digits(1, 20), (body) => {
        expect(String(gs1CheckDigit(body))).toBe(oracle.compute(body))
        expect(hasGs1CheckDigit(`${body}${gs1CheckDigit(body)}`)).toBe(true)
      }),
    )
  })

  test.each(['', '12A', ' 1', '١٢٣'])('%j has no check digit: it is not digits alone', (body) => {
    expect(() => gs1CheckDigit(body)).toThrow(RangeError)
    expect(hasGs1CheckDigit(`${body}0`)).toBe(false)
  })
})

describe('toGtin14', () => {
  test.each(vectors.gtin_to_14)('$type $input is kept as $gtin14 ($source)', ({ input, gtin14 }) => {
    expect(toGtin14(input)).toEqual({ ok: true, gtin: gtin14 })
  })

  test.each([
    ['', 'empty-value'],
    ['0950600013435', 'check-digit'],
    ['09506000134353', 'check-digit'],
    ['950600013', 'truncated'],
    ['1', 'truncated'],
    ['095060001343520', 'data-too-long'],
    ['0950600013435O', 'bad-character'],
    [' 9506000134352', 'bad-character'],
  ])('%j is refused: %s', (input, reason) => {
    expect(toGtin14(input)).toMatchObject({ ok: false, reason })
  })

  test('any one digit changed is refused', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(7, 11, 12, 13).chain((length) => digits(length, length)),
        fc.nat(),
        fc.integer({ min: 1, max: 9 }),
        (body, where, by) => {
          const good = `${body}${gs1CheckDigit(body)}`
          const at = where % good.length
          const changed = `${good.slice(0, at)}${(Number(good[at]) + by) % 10}${good.slice(at + 1)}`
          expect(toGtin14(good)).toEqual({ ok: true, gtin: good.padStart(14, '0') })
          expect(toGtin14(changed)).toMatchObject({ ok: false, reason: 'check-digit' })
        },
      ),
    )
  })
})
