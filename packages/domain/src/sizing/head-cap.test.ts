import { describe, expect, test } from 'vitest'
import { readVectors, type Sourced } from '../../test/read-vectors.js'
import { headArcDegrees, headCapFromHeight, headCapFromRatio, USUAL_HEAD_RATIO } from './head-cap.js'

interface CapVectors {
  table_k_0_75: ({ D: number; R: number; h: number; arc_deg: number } & Sourced)[]
  general: ({ D: number; h: number; R: number; k: number; hemisphere: boolean; arc_deg: number } & Sourced)[]
  sensitivity: ({
    D: number
    k: number
    dh_per_dD: number
    dR_per_dD: number
    dR_dh_at_fixed_D: number
    dR_da_at_fixed_h: number
  } & Sourced)[]
  literature_consistency: ({
    name: string
    R: number
    D?: number
    h: number
    pred_R_from_D_h?: number
  } & Sourced)[]
}
const vectors = readVectors<CapVectors>('cap-geometry')

describe('headCapFromRatio', () => {
  test.each(vectors.table_k_0_75)('base $D mm at k 0.75: radius $R mm, height $h mm ($source)', (row) => {
    const cap = headCapFromRatio(row.D)
    expect(cap.ratio).toBe(USUAL_HEAD_RATIO)
    expect(cap.radiusMm).toBeCloseTo(row.R, 5)
    expect(cap.heightMm).toBeCloseTo(row.h, 5)
    expect(headArcDegrees(cap)).toBeCloseTo(row.arc_deg, 3)
    expect(cap.moreThanHemisphere).toBe(false)
  })

  test('at k 3/4 the radius is 2/sqrt(15) of the base and the height 1.5/sqrt(15) (closed form)', () => {
    const cap = headCapFromRatio(1, 0.75)
    expect(cap.radiusMm).toBeCloseTo(2 / Math.sqrt(15), 12)
    expect(cap.heightMm).toBeCloseTo(1.5 / Math.sqrt(15), 12)
  })

  test.each(vectors.sensitivity)('slopes at base $D mm, k $k ($source)', (row) => {
    const step = 1e-4
    const slope = (of: (x: number) => number) => (of(step) - of(-step)) / (2 * step)
    const { heightMm } = headCapFromRatio(row.D, row.k)
    expect(slope((x) => headCapFromRatio(row.D + x, row.k).heightMm)).toBeCloseTo(row.dh_per_dD, 5)
    expect(slope((x) => headCapFromRatio(row.D + x, row.k).radiusMm)).toBeCloseTo(row.dR_per_dD, 5)
    expect(slope((x) => headCapFromHeight(row.D, heightMm + x).radiusMm)).toBeCloseTo(row.dR_dh_at_fixed_D, 5)
    expect(slope((x) => headCapFromHeight(row.D + 2 * x, heightMm).radiusMm)).toBeCloseTo(
      row.dR_da_at_fixed_h,
      5,
    )
  })

  test('k 1 is a hemisphere: radius and height are half the base', () => {
    expect(headCapFromRatio(44, 1)).toMatchObject({ radiusMm: 22, heightMm: 22, moreThanHemisphere: false })
  })

  test('k above 1 is flagged as more than a hemisphere', () => {
    expect(headCapFromRatio(44, 1.2).moreThanHemisphere).toBe(true)
  })

  test.each([
    [0, 0.75, /diameter/],
    [-44, 0.75, /diameter/],
    [Number.NaN, 0.75, /diameter/],
    [Number.POSITIVE_INFINITY, 0.75, /diameter/],
    [44, 0, /ratio/],
    [44, 2, /ratio/],
    [44, -0.1, /ratio/],
    [44, Number.NaN, /ratio/],
  ])('base %s mm with k %s has no cap', (diameterMm, ratio, why) => {
    expect(() => headCapFromRatio(diameterMm, ratio)).toThrow(RangeError)
    expect(() => headCapFromRatio(diameterMm, ratio)).toThrow(why)
  })
})

describe('headCapFromHeight', () => {
  test.each(vectors.general)('base $D mm, height $h mm: radius $R mm, k $k ($source)', (row) => {
    const cap = headCapFromHeight(row.D, row.h)
    expect(cap.radiusMm).toBeCloseTo(row.R, 5)
    expect(cap.ratio).toBeCloseTo(row.k, 5)
    expect(headArcDegrees(cap)).toBeCloseTo(row.arc_deg, 3)
    expect(cap.moreThanHemisphere).toBe(false)
    expect(cap.heightMm === cap.radiusMm).toBe(row.hemisphere)
  })

  test('the two ways to a cap agree', () => {
    const byHeight = headCapFromHeight(50, 19)
    const byRatio = headCapFromRatio(50, byHeight.ratio)
    expect(byRatio.radiusMm).toBeCloseTo(byHeight.radiusMm, 10)
    expect(byRatio.heightMm).toBeCloseTo(19, 10)
  })

  const measured = vectors.literature_consistency.filter((row) => row.D !== undefined)
  test.each(measured)('published means fit a spherical cap within 0.5 mm: $name ($source)', (row) => {
    const cap = headCapFromHeight(row.D ?? 0, row.h)
    expect(cap.radiusMm).toBeCloseTo(row.pred_R_from_D_h ?? 0, 3)
    expect(Math.abs(cap.radiusMm - row.R)).toBeLessThan(0.5)
  })

  test('higher than half the base is more than a hemisphere, and flagged', () => {
    expect(headCapFromHeight(46, 23.1).moreThanHemisphere).toBe(true)
    expect(headCapFromHeight(46, 23).moreThanHemisphere).toBe(false)
  })

  test.each([
    [0, 18],
    [46, 0],
    [46, -1],
    [46, Number.NaN],
  ])('base %s mm with height %s mm has no cap', (diameterMm, heightMm) => {
    expect(() => headCapFromHeight(diameterMm, heightMm)).toThrow(RangeError)
  })
})
