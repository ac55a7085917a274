import { DateTime } from 'luxon'

/** The time, as everybody in the server asks for it. */
export interface Clock {
  now(): Date
  /** The house's day, `YYYY-MM-DD`, in its own zone. */
  today(): string
}

/** The day of an instant in a zone, `YYYY-MM-DD`. */
export const dayIn = (zone: string, instant: Date): string =>
  DateTime.fromJSDate(instant, { zone }).toFormat('yyyy-MM-dd')

/**
 * First and last moment of a day in a zone: from inclusive, to exclusive. A day is 23 or 25 hours long where
 * the clocks change.
 *
 * @param day `YYYY-MM-DD`
 */
export function boundsOfDay(zone: string, day: string): { from: Date; to: Date } {
  const start = DateTime.fromISO(day, { zone }).startOf('day')
  return { from: start.toJSDate(), to: start.plus({ days: 1 }).startOf('day').toJSDate() }
}

/** The machine's clock. @param zone the house's IANA time zone. */
export function systemClock(zone: string): Clock {
  // Nearly every request asks for the day, and it changes once a day.
  let known = { day: '', fromMs: 0, toMs: 0 }
  return {
    now: () => new Date(),
    today() {
      const now = new Date()
      if (now.getTime() < known.fromMs || now.getTime() >= known.toMs) {
        const day = dayIn(zone, now)
        const { from, to } = boundsOfDay(zone, day)
        known = { day, fromMs: from.getTime(), toMs: to.getTime() }
      }
      return known.day
    },
  }
}
