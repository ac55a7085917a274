import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { from, readVectors, type Sourced } from '../../test/read-vectors.js'
import {
  dayOf,
  dayOfYear,
  daysInMonth,
  fullYear,
  gs1Day,
  isCalendarDay,
  monthEnd,
  yearOfToday,
} from './date.js'

type DateVector = {
  yymmdd: string
  reference_year: number
  valid: boolean
  iso?: string
  day_was_00?: boolean
  why?: string
} & Sourced
const vectors = readVectors<{ dates: DateVector[] }>('gs1').dates.map((row) => ({
  ...row,
  source: from(row),
}))

describe('gs1Day', () => {
  test.each(vectors.filter((row) => row.valid))(
    '$yymmdd read in $reference_year is $iso ($source)',
    (row) => {
      expect(gs1Day(row.yymmdd, `${row.reference_year}-06-15`, true)).toEqual({ ok: true, day: row.iso })
    },
  )

  test.each(vectors.filter((row) => !row.valid))(
    '$yymmdd read in $reference_year is no date: $why ($source)',
    (row) => {
      expect(gs1Day(row.yymmdd, `${row.reference_year}-06-15`, true)).toEqual({ ok: false, why: row.why })
    },
  )

  test.each(vectors.filter((row) => row.day_was_00))(
    '$yymmdd is no date where day 00 is not allowed, as in 7003',
    (row) => {
      expect(gs1Day(row.yymmdd, `${row.reference_year}-06-15`, false)).toEqual({ ok: false, why: 'day' })
    },
  )

  test.each(['26A231', '26-1-1', ' 26123'])('%j is no date: it is not digits', (text) => {
    expect(gs1Day(text, '2026-12-01', true)).toEqual({ ok: false, why: 'character' })
  })

  test('agrees with the calendar of the platform for every day of fifty years', () => {
    for (let ms = Date.UTC(2000, 0, 1); ms < Date.UTC(2050, 0, 1); ms += 86_400_000) {
      const day = new Date(ms).toISOString().slice(0, 10)
      expect(gs1Day(day.slice(2).replaceAll('-', ''), '2026-12-01', true)).toEqual({ ok: true, day })
    }
  })
})

describe('fullYear', () => {
  test.each([
    [76, 2026, 2076],
    [77, 2026, 1977],
    [10, 2060, 2110],
    [11, 2060, 2011],
    [0, 2099, 2100],
  ])('year %s read in %s is %s (derived from GS1 General Specifications, section 7.12)', (yy, year, full) => {
    expect(fullYear(yy, year)).toBe(full)
  })

  test('lies from 49 years back to 50 ahead, and ends in the two digits', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 99 }), fc.integer({ min: 1900, max: 2200 }), (yy, year) => {
        const full = fullYear(yy, year)
        expect(full - year).toBeGreaterThanOrEqual(-49)
        expect(full - year).toBeLessThanOrEqual(50)
        expect(full % 100).toBe(yy)
      }),
    )
  })
})

describe('days', () => {
  test.each([
    [2028, 29],
    [2027, 28],
    [2000, 29],
    [2100, 28],
  ])('February %s has %s days', (year, days) => {
    expect(daysInMonth(year, 2)).toBe(days)
    expect(monthEnd(year, 2)).toEqual({ ok: true, day: `${year}-02-${days}` })
  })

  test.each([
    [2020, 15, '2020-01-15'],
    [2014, 32, '2014-02-01'],
    [2028, 60, '2028-02-29'],
    [2027, 60, '2027-03-01'],
    [2028, 366, '2028-12-31'],
    [2027, 365, '2027-12-31'],
    [2005, 271, '2005-09-28'],
  ])('day %s-%s of the year is %s', (year, number, day) => {
    expect(dayOfYear(year, number)).toEqual({ ok: true, day })
  })

  test.each([
    [2027, 366],
    [2028, 367],
    [2028, 0],
    [2028, 999],
  ])('%s has no day %s', (year, number) => {
    expect(dayOfYear(year, number)).toEqual({ ok: false, why: 'day' })
  })

  test('month 0 and 13 do not exist, nor does day 31 in April', () => {
    expect(dayOf(2028, 0, 1)).toEqual({ ok: false, why: 'month' })
    expect(monthEnd(2028, 13)).toEqual({ ok: false, why: 'month' })
    expect(dayOf(2028, 4, 31)).toEqual({ ok: false, why: 'day' })
  })

  test.each(['2028-02-29', '2026-12-01'])('%s is a calendar day', (day) => {
    expect(isCalendarDay(day)).toBe(true)
    expect(yearOfToday(day)).toBe(Number(day.slice(0, 4)))
  })

  test.each(['2027-02-29', '2026-12-1', '2026-12-01T00:00', '', '2026-00-10', '26-12-01'])(
    '%j is no calendar day, and cannot be today',
    (day) => {
      expect(isCalendarDay(day)).toBe(false)
      expect(() => yearOfToday(day)).toThrow(RangeError)
    },
  )
})
