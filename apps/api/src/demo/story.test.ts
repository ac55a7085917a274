import { createHash } from 'node:crypto'
import { describe, expect, test } from 'vitest'
import { dayIn } from '../platform/clock.js'
import { demoRows, tellStory } from './demo.js'

// Telling the story keeps one core busy for seconds: these have no database that would wait meanwhile.

describe('the rows', () => {
  test('the same moment gives the same rows; at night too every case of the day bears the load day', async () => {
    const night = new Date('2026-12-01T23:20:00Z')
    const zone = 'Europe/Brussels'
    const digest = (rows: unknown): string => createHash('sha256').update(JSON.stringify(rows)).digest('hex')
    const first = await demoRows(night, zone)
    expect(digest(await demoRows(night, zone))).toBe(digest(first))

    const cases = first.tables.find(({ table }) => table === 'surgical_case')?.rows ?? []
    const today = cases.filter((row) => String(row['case_number']).startsWith('0412-'))
    expect(today.length).toBeGreaterThanOrEqual(8)
    for (const row of today) expect(dayIn(zone, row['starts_at'] as Date)).toBe('2026-12-02')
  }, 120_000)
})

describe('the story on every day of the week', () => {
  test.each([1, 2, 3, 4, 5, 6, 7])(
    '2026-12-0%s: it is told to the end, with the same hands full',
    (day) => {
      const { stock } = tellStory(new Date(`2026-12-0${day}T04:00:00Z`), 'America/New_York')
      const inState = (state: string) => stock.units.filter((unit) => unit.state === state)
      expect(inState('held').map(({ product }) => product.ref)).toContain('WTH-CM-03')
      expect(
        stock.units
          .filter(({ lot }) => lot === 'L26A020')
          .map(({ state }) => state)
          .sort(),
      ).toEqual(['available', 'held', 'implanted'])
      expect(inState('putBack')).toHaveLength(1)
      expect(inState('available').length).toBeGreaterThanOrEqual(900)
    },
    120_000,
  )
})
