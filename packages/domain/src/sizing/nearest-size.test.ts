import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { nearestSizes } from './nearest-size.js'

const heads = [38, 40, 42, 44, 46, 48, 50, 52, 54, 56].map((mm) => ({ ref: `H${mm}`, mm }))
const nearest = (measuredMm: number) => nearestSizes(heads, (head) => head.mm, measuredMm)
const refs = (found: readonly { size: { ref: string } }[]) => found.map((one) => one.size.ref)

describe('nearestSizes', () => {
  test('between two sizes: the one below and the one above, with the difference in mm', () => {
    const found = nearest(46.5)
    expect(found.exact).toEqual([])
    expect(found.below).toEqual([{ size: { ref: 'H46', mm: 46 }, differenceMm: -0.5 }])
    expect(found.above).toEqual([{ size: { ref: 'H48', mm: 48 }, differenceMm: 1.5 }])
  })

  test('a size that equals the measurement is exact, and its neighbours stay below and above', () => {
    const found = nearest(48)
    expect(found.exact.map((head) => head.ref)).toEqual(['H48'])
    expect(refs(found.below)).toEqual(['H46'])
    expect(refs(found.above)).toEqual(['H50'])
  })

  test('smaller than the smallest size: nothing below', () => {
    expect(nearest(30)).toMatchObject({ exact: [], below: [], above: [{ differenceMm: 8 }] })
  })

  test('larger than the largest size: nothing above', () => {
    expect(nearest(60)).toMatchObject({ exact: [], above: [], below: [{ differenceMm: -4 }] })
  })

  test('variants of one size come together, in the order of the catalogue', () => {
    const variants = [
      { ref: 'H48E', mm: 48 },
      { ref: 'H46', mm: 46 },
      { ref: 'H48', mm: 48 },
    ]
    expect(refs(nearestSizes(variants, (head) => head.mm, 47).above)).toEqual(['H48E', 'H48'])
  })

  test('0.1 + 0.2 measured is the size of 0.3: rounding in the computer is no difference', () => {
    expect(nearestSizes([0.3], (mm) => mm, 0.1 + 0.2).exact).toEqual([0.3])
  })

  test('no sizes: nothing nearby', () => {
    expect(nearestSizes([], () => 1, 44)).toEqual({ exact: [], below: [], above: [] })
  })

  test.each([0, -1, Number.NaN, Number.POSITIVE_INFINITY])('a measurement of %s mm is refused', (mm) => {
    expect(() => nearest(mm)).toThrow(RangeError)
  })

  test('a size without a length is refused, not left out', () => {
    expect(() => nearestSizes([{ mm: Number.NaN }], (size) => size.mm, 44)).toThrow(RangeError)
  })

  test('no size lies nearer than those given', () => {
    const mm = fc.integer({ min: 10, max: 800 }).map((tenths) => tenths / 10)
    fc.assert(
      fc.property(fc.array(mm, { maxLength: 30 }), mm, (sizes, measured) => {
        const found = nearestSizes(sizes, (size) => size, measured)
        const [below, above] = [found.below[0]?.size ?? -Infinity, found.above[0]?.size ?? Infinity]
        expect(sizes.filter((size) => size > below && size < above && size !== measured)).toEqual([])
        expect(found.exact).toEqual(sizes.filter((size) => size === measured))
      }),
    )
  })
})
