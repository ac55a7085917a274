import { afterEach, describe, expect, it, vi } from 'vitest'
import { boundsOfDay, dayIn, systemClock } from './clock.js'

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

describe('the machine’s clock', () => {
  afterEach(() => void vi.useRealTimers())

  it.each([
    ['goes on', ['2026-10-25T21:59:59.999Z', '2026-10-25'], ['2026-10-25T23:00:00.000Z', '2026-10-26']],
    [
      'stands at the last moment',
      ['2026-10-25T22:59:59.999Z', '2026-10-25'],
      ['2026-10-25T22:59:59.999Z', '2026-10-25'],
    ],
    ['is put back', ['2026-10-26T08:00:00.000Z', '2026-10-26'], ['2026-10-24T08:00:00.000Z', '2026-10-24']],
  ])('knows the house’s day when time %s', (_what, ...moments) => {
    vi.useFakeTimers()
    const clock = systemClock('Europe/Brussels')
    for (const [instant, day] of moments) {
      vi.setSystemTime(instant!)
      expect([clock.now().toISOString(), clock.today()]).toEqual([instant, day])
    }
  })
})
