import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { from, readVectors, type Sourced } from '../../test/read-vectors.js'
import { quantile } from './quantile.js'

type Case = { data_name: string; data: number[]; p: number; type6: number; type7: number } & Sourced
const { cases } = readVectors<{ cases: Case[] }>('quantiles')

describe('quantile', () => {
  test.each(cases.map((row) => ({ ...row, source: from(row) })))(
    '$data_name at $p is $type7 ($source)',
    (row) => {
      expect(quantile(row.data, row.p)).toBeCloseTo(row.type7, 8)
    },
  )

  test('p 0.9 of ten delivery times is 276 by definition 7, not 564 as by definition 6 (constructed; computed with NumPy)', () => {
    expect(quantile([95, 110, 120, 125, 140, 150, 165, 180, 240, 600], 0.9)).toBeCloseTo(276, 10)
  })

  test.each([
    [0, 10.4],
    [0.25, 15.425],
    [0.5, 19.2],
    [0.75, 22.8],
    [1, 33.9],
  ])('mtcars mpg at %s is %s (printed by R for quantile(); from memory, reproduced)', (p, expected) => {
    const mpg = cases.find((row) => row.data_name === 'mtcars mpg')?.data ?? []
    expect(mpg).toHaveLength(32)
    expect(quantile(mpg, p)).toBeCloseTo(expected, 10)
  })

  test('the order of the values does not matter, and they are left as they were', () => {
    const values = [3, 1, 2]
    expect(quantile(values, 0.5)).toBe(2)
    expect(values).toEqual([3, 1, 2])
  })

  test('numbers are sorted as numbers: 9 comes before 10', () => {
    expect(quantile([10, 9, 100], 0)).toBe(9)
  })

  test.each([
    [[], 0.5, /no values/],
    [[1], -0.01, /p must/],
    [[1], 1.000001, /p must/],
    [[1], Number.NaN, /p must/],
    [[1, Number.NaN], 0.5, /finite/],
    [[1, Number.POSITIVE_INFINITY], 0.5, /finite/],
  ])('quantile(%j, %s) is refused', (values, p, why) => {
    expect(() => quantile(values, p)).toThrow(RangeError)
    expect(() => quantile(values, p)).toThrow(why)
  })

  test('lies between the least and the greatest value, and does not fall as p rises', () => {
    const value = fc.integer({ min: -1_000_000, max: 1_000_000 })
    const fraction = fc.integer({ min: 0, max: 1000 }).map((n) => n / 1000)
    fc.assert(
      fc.property(fc.array(value, { minLength: 1 }), fraction, fraction, (values, p, q) => {
        const [low, high] = [quantile(values, Math.min(p, q)), quantile(values, Math.max(p, q))]
        expect(low).toBeGreaterThanOrEqual(Math.min(...values) - 1e-6)
        expect(high).toBeLessThanOrEqual(Math.max(...values) + 1e-6)
        expect(high - low).toBeGreaterThanOrEqual(-1e-6)
      }),
    )
  })
})
