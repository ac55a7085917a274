import { DateTime } from 'luxon'
import { EXPIRES_SOON_DAYS } from '@bellpull/domain'
import { boundsOfDay, dayIn } from '../platform/clock.js'

/** The moment of the story that is *now* whenever the demo is loaded. */
const STORY_NOW = '10:45'
const MINUTE_MS = 60_000

/** The demo's time: the story's clock laid on the day on which it is loaded. */
export interface StoryTime {
  readonly now: Date
  readonly zone: string
  /** The day of loading in the house's zone, `YYYY-MM-DD`. */
  readonly today: string
  /** The instant of `HH:MM` or `HH:MM:SS` of the story: as far from now as it is from 10:45. */
  at(clock: string): Date
  /** A day so many days from today, `YYYY-MM-DD`; negative is before. */
  day(fromToday: number): string
  /** The instant of a clock time in the house's zone on such a day: for what is not part of today's story. */
  on(fromToday: number, clock: string): Date
}

export function storyTime(now: Date, zone: string): StoryTime {
  const today = dayIn(zone, now)
  const day = (fromToday: number): string =>
    DateTime.fromISO(today, { zone: 'UTC' }).plus({ days: fromToday }).toFormat('yyyy-MM-dd')
  return {
    now,
    zone,
    today,
    at: (clock) => new Date(now.getTime() + msOfClock(clock) - msOfClock(STORY_NOW)),
    day,
    on: (fromToday, clock) => DateTime.fromISO(`${day(fromToday)}T${clock}`, { zone }).toJSDate(),
  }
}

function msOfClock(clock: string): number {
  const [hours = 0, minutes = 0, seconds = 0] = clock.split(':').map(Number)
  return (hours * 60 + minutes) * MINUTE_MS + seconds * 1000
}

export const minutesAfter = (instant: Date, minutes: number): Date =>
  new Date(instant.getTime() + Math.round(minutes * MINUTE_MS))

/**
 * When the planned starts of today's cases have to be written down. Loaded late at night or early in the
 * morning, some starts of the story fall on the day before or after; a case must bear the load day all the
 * same, or nobody would find it among today's. Those starts move to the edge of the day, a minute apart, so
 * that their order stays. What happened keeps its true distance from now.
 *
 * @param starts in any order.
 * @returns for each start, in the same order, an instant of the story's day.
 */
export function withinToday(time: StoryTime, starts: readonly Date[]): Date[] {
  const { from, to } = boundsOfDay(time.zone, time.today)
  const order = starts.map((start, index) => ({ at: start.getTime(), index })).sort((a, b) => a.at - b.at)
  const placed = order.map(({ at }) => at)
  for (let i = 0, earliest = from.getTime(); i < placed.length; i += 1, earliest += MINUTE_MS)
    placed[i] = Math.max(placed[i]!, earliest)
  for (let i = placed.length - 1, latest = to.getTime() - MINUTE_MS; i >= 0; i -= 1, latest -= MINUTE_MS)
    placed[i] = Math.min(placed[i]!, latest)
  const result: Date[] = []
  order.forEach(({ index }, i) => {
    result[index] = new Date(placed[i]!)
  })
  return result
}

/** A day of the house, and the last one on which a use-by date counts as soon. */
export interface HouseDay {
  readonly day: string
  readonly soonUntil: string
}

/** The house's days by instant, remembered: the story asks for the same few days thousands of times. */
export class HouseDays {
  #from = Number.POSITIVE_INFINITY
  #to = Number.NEGATIVE_INFINITY
  #known: HouseDay = { day: '', soonUntil: '' }

  constructor(readonly zone: string) {}

  of(at: Date): HouseDay {
    const ms = at.getTime()
    if (ms >= this.#from && ms < this.#to) return this.#known
    const day = dayIn(this.zone, at)
    const { from, to } = boundsOfDay(this.zone, day)
    this.#from = from.getTime()
    this.#to = to.getTime()
    this.#known = {
      day,
      soonUntil: DateTime.fromISO(day, { zone: 'UTC' })
        .plus({ days: EXPIRES_SOON_DAYS })
        .toFormat('yyyy-MM-dd'),
    }
    return this.#known
  }
}
