import { describe, expect, test } from 'vitest'
import { ARRIVAL_MINIMUM_COUNT, arrivalRange } from './arrival.js'

const minutes = (count: number) => Array.from({ length: count }, (_, index) => index + 1)

describe('arrivalRange', () => {
  test('median, nine in ten and how many it rests on (definition 7: 10.5 and 18.1 of 1 to 20)', () => {
    const range = arrivalRange(minutes(20))
    expect(range?.medianMinutes).toBeCloseTo(10.5, 10)
    expect(range?.nineInTenMinutes).toBeCloseTo(18.1, 10)
    expect(range?.count).toBe(20)
  })

  test('under the minimum there is no range, and none is made up', () => {
    expect(arrivalRange(minutes(ARRIVAL_MINIMUM_COUNT - 1))).toBeNull()
    expect(arrivalRange([])).toBeNull()
    expect(arrivalRange(minutes(4), 5)).toBeNull()
  })

  test('the minimum can be stated', () => {
    expect(arrivalRange([6, 2, 4], 3)).toEqual({ medianMinutes: 4, nineInTenMinutes: 5.6, count: 3 })
  })

  test('one very long fetch does not move the median', () => {
    expect(arrivalRange([...minutes(20), 600])?.medianMinutes).toBe(11)
  })

  test.each([
    [[1, -1], 1],
    [[1, Number.NaN], 1],
    [[1], 0],
    [[1], 1.5],
  ])('arrivalRange(%j, %s) is refused', (values, minimum) => {
    expect(() => arrivalRange(values, minimum)).toThrow(RangeError)
  })

  test('a bad duration is refused even when there are too few', () => {
    expect(() => arrivalRange([-3])).toThrow(RangeError)
  })
})
