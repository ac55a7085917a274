import { describe, expect, test } from 'vitest'
import { from, readVectors, type Sourced } from '../../test/read-vectors.js'
import { wilsonInterval, type Confidence } from './proportion.js'

type Case = { k: number; n: number; conf: Confidence; wilson: [number, number] } & Sourced
const { cases } = readVectors<{ cases: Case[] }>('binomial-ci')

describe('wilsonInterval', () => {
  test.each(cases.map((row) => ({ ...row, source: from(row) })))(
    '$k of $n at $conf: $wilson ($source)',
    (row) => {
      const { low, high } = wilsonInterval(row.k, row.n, row.conf)
      expect(low).toBeCloseTo(row.wilson[0], 9)
      expect(high).toBeCloseTo(row.wilson[1], 9)
    },
  )

  test.each([
    [81, 263, 0.2553, 0.3662],
    [15, 148, 0.0624, 0.1605],
    [0, 20, 0, 0.1611],
    [1, 29, 0.0061, 0.1718],
  ])('%s of %s: %s to %s (Newcombe 1998, table I; from memory, reproduced)', (k, n, low, high) => {
    const found = wilsonInterval(k, n)
    expect(found.low).toBeCloseTo(low, 4)
    expect(found.high).toBeCloseTo(high, 4)
  })

  test('none of n begins at exactly 0, all of n ends at exactly 1', () => {
    for (let n = 1; n <= 200; n += 1) {
      expect(wilsonInterval(0, n).low).toBe(0)
      expect(wilsonInterval(n, n).high).toBe(1)
    }
  })

  test('k of n and n − k of n mirror each other, and hold the share', () => {
    for (let k = 0; k <= 37; k += 1) {
      const found = wilsonInterval(k, 37)
      const mirrored = wilsonInterval(37 - k, 37)
      expect(found.low).toBeCloseTo(1 - mirrored.high, 12)
      expect(found.low).toBeLessThanOrEqual(k / 37)
      expect(found.high).toBeGreaterThanOrEqual(k / 37)
    }
  })

  test.each([
    [0, 0],
    [-1, 5],
    [6, 5],
    [1.5, 5],
    [1, Number.NaN],
  ])('%s of %s is refused', (k, n) => {
    expect(() => wilsonInterval(k, n)).toThrow(RangeError)
  })
})
