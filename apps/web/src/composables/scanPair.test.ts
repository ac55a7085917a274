import { describe, expect, test } from 'vitest'
import { isHalfLabel, pairOf } from './scanPair'

const TODAY = '2032-05-12'
// Invented, GS1 prefix 952 (kept for examples): the check digit of 0952123454321 is 3.
const GTIN = '0109521234543213'
const LOT = '17340331107K2201'

describe('may a barcode be half of a label?', () => {
  test.each([
    { what: 'a product without lot or date', scan: GTIN, half: true },
    { what: 'lot and date without a product', scan: LOT, half: true },
    { what: 'product, date and lot in one', scan: `${GTIN}${LOT}`, half: false },
    { what: 'something that is no label', scan: 'hello there', half: false },
  ])('$what: $half', ({ scan, half }) => {
    expect(isHalfLabel(scan, TODAY)).toBe(half)
  })
})

test('two halves are one label, in either order; the same one twice is not', () => {
  expect(pairOf(GTIN, LOT, TODAY)).toEqual([GTIN, LOT])
  expect(pairOf(LOT, GTIN, TODAY)).toEqual([LOT, GTIN])
  expect(pairOf(GTIN, GTIN, TODAY)).toBeNull()
  expect(pairOf(GTIN, 'hello there', TODAY)).toBeNull()
})
