/** Times of day and days, as the house says them. All in its own zone; instants are UTC ISO 8601. */

const MINUTE_MS = 60_000
/** Within this a time is said as minutes to go, in milliseconds. */
const SOON_MS = 10 * MINUTE_MS

const formats = new Map<string, Intl.DateTimeFormat>()

function formatOf(zone: string, options: Intl.DateTimeFormatOptions): Intl.DateTimeFormat {
  const key = zone + JSON.stringify(options)
  const known = formats.get(key) ?? new Intl.DateTimeFormat('en-GB', { ...options, timeZone: zone })
  formats.set(key, known)
  return known
}

/** Time of day: "10:52". */
export const timeOfDay = (instant: string | number, zone: string): string =>
  formatOf(zone, { hour: '2-digit', minute: '2-digit', hourCycle: 'h23' }).format(new Date(instant))

/** Day of an instant in the house: "12 May 2032". */
export const dayOfInstant = (instant: string | number, zone: string): string =>
  formatOf(zone, { day: 'numeric', month: 'short', year: 'numeric' })
    .format(new Date(instant))
    .replace('Sept', 'Sep')

/** The day of an instant in the house, `YYYY-MM-DD`. */
export const dayIn = (instant: string | number, zone: string): string =>
  formatOf(zone, { year: 'numeric', month: '2-digit', day: '2-digit' })
    .format(new Date(instant))
    .replace(/^(\d+)\/(\d+)\/(\d+)$/, '$3-$2-$1')

/** A day `YYYY-MM-DD`, which has no zone: "31 Mar 2034". */
export const dayText = (day: string): string => dayOfInstant(`${day}T12:00:00Z`, 'UTC')

export type Needed =
  | { readonly say: 'standby' }
  | { readonly say: 'now' }
  | { readonly say: 'in'; readonly minutes: number }
  | { readonly say: 'at'; readonly time: string }
  | { readonly say: 'passed'; readonly time: string }

/** How the time at which a call is needed is said: minutes when it is near, the time of day otherwise. */
export function neededAs(neededAt: string | null, nowMs: number, zone: string): Needed {
  if (neededAt === null) return { say: 'standby' }
  const leftMs = Date.parse(neededAt) - nowMs
  const time = timeOfDay(neededAt, zone)
  if (leftMs <= -MINUTE_MS) return { say: 'passed', time }
  if (leftMs < MINUTE_MS) return { say: 'now' }
  if (leftMs < SOON_MS) return { say: 'in', minutes: Math.ceil(leftMs / MINUTE_MS) }
  return { say: 'at', time }
}

export interface Age {
  readonly unit: 'seconds' | 'minutes' | 'hours'
  readonly n: number
}

/** A length of time as one rounded-down number with its unit. */
export function ageAs(ms: number): Age {
  const seconds = Math.max(0, Math.floor(ms / 1_000))
  if (seconds < 60) return { unit: 'seconds', n: seconds }
  if (seconds < 3_600) return { unit: 'minutes', n: Math.floor(seconds / 60) }
  return { unit: 'hours', n: Math.floor(seconds / 3_600) }
}
