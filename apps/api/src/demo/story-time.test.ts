import { describe, expect, test } from 'vitest'
import { dayIn } from '../platform/clock.js'
import { storyTime, withinToday } from './story-time.js'

const STARTS = ['13:20', '07:30', '07:30', '08:00', '09:00', '10:00', '10:30']

describe('the story’s clock', () => {
  test.each([
    ['10:45', '2026-12-01T16:00:00.000Z'],
    ['10:44:30', '2026-12-01T15:59:30.000Z'],
    ['07:30', '2026-12-01T12:45:00.000Z'],
    ['13:20', '2026-12-01T18:35:00.000Z'],
  ])('%s is as far from 10:45 as it is from now', (clock, expected) => {
    const time = storyTime(new Date('2026-12-01T16:00:00Z'), 'UTC')
    expect(time.at(clock).toISOString()).toBe(expected)
  })

  test.each([
    ['UTC', '2026-12-01', '2026-11-30T07:30:00.000Z'],
    ['Europe/Brussels', '2026-12-02', '2026-12-01T06:30:00.000Z'],
    ['America/New_York', '2026-12-01', '2026-11-30T12:30:00.000Z'],
  ])('days are those of the house in %s', (zone, today, yesterdayMorning) => {
    const time = storyTime(new Date('2026-12-01T23:30:00Z'), zone)
    expect(time.today).toBe(today)
    expect(time.on(-1, '07:30').toISOString()).toBe(yesterdayMorning)
  })
})

describe('withinToday', () => {
  test.each(
    ['UTC', 'Europe/Brussels', 'America/New_York', 'Asia/Kolkata'].flatMap((zone) =>
      ['00:00:00', '00:20:00', '03:00:00', '10:45:00', '21:30:00', '23:59:59'].map((at) => ({ zone, at })),
    ),
  )('loaded at $at UTC in $zone, every case bears the load day and keeps its place', ({ zone, at }) => {
    const time = storyTime(new Date(`2026-12-01T${at}Z`), zone)
    const told = STARTS.map((clock) => time.at(clock))
    const placed = withinToday(time, told)
    expect(placed.map((start) => dayIn(zone, start))).toEqual(STARTS.map(() => time.today))
    for (let a = 0; a < told.length; a += 1)
      for (let b = 0; b < told.length; b += 1)
        if (told[a]! < told[b]!) expect(placed[a]!.getTime()).toBeLessThan(placed[b]!.getTime())
  })

  test('at noon nothing is moved', () => {
    const time = storyTime(new Date('2026-12-01T12:00:00Z'), 'UTC')
    const told = STARTS.map((clock) => time.at(clock))
    expect(withinToday(time, told)).toEqual(told)
  })
})
