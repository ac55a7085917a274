import { describe, expect, it } from 'vitest'
import { boundsOfDay, dayIn } from './clock.js'

describe('the house’s day', () => {
  it.each([
    ['UTC', '2026-12-01T23:59:59Z', '2026-12-01'],
    ['Europe/Brussels', '2026-12-01T23:00:00Z', '2026-12-02'],
    ['America/New_York', '2026-12-02T04:59:59Z', '2026-12-01'],
    ['Pacific/Auckland', '2026-12-01T11:00:00Z', '2026-12-02'],
  ])('in %s at %s is %s', (zone, instant, day) => {
    expect(dayIn(zone, new Date(instant))).toBe(day)
  })

  it.each([
    ['UTC', '2026-12-01', '2026-12-01T00:00:00.000Z', '2026-12-02T00:00:00.000Z'],
    // 23 and 25 hours: the clocks change on the last Sundays of March and October.
    ['Europe/Brussels', '2026-03-29', '2026-03-28T23:00:00.000Z', '2026-03-29T22:00:00.000Z'],
    ['Europe/Brussels', '2026-10-25', '2026-10-24T22:00:00.000Z', '2026-10-25T23:00:00.000Z'],
  ])('in %s, %s runs from %s to %s', (zone, day, from, to) => {
    const bounds = boundsOfDay(zone, day)
    expect([bounds.from.toISOString(), bounds.to.toISOString()]).toEqual([from, to])
  })
})
