import { quantile } from './quantile.js'

/** How long a package is likely to take to the room, from what past ones took. Minutes. */
export interface ArrivalRange {
  /** Half of the past ones took no longer. */
  readonly medianMinutes: number
  /** Nine in ten took no longer. */
  readonly nineInTenMinutes: number
  /** How many past ones this rests on; shown beside the range. */
  readonly count: number
}

/** Under twenty, "nine in ten" would rest on one or two packages (house rule; no source). */
export const ARRIVAL_MINIMUM_COUNT = 20

/**
 * Minutes to the room as a range, from past durations on the same route and hour.
 *
 * @param minutes past durations in minutes, in any order; not modified.
 * @param minimumCount fewer than this give no range.
 * @returns `null` under the minimum: no guess is shown for want of data.
 * @throws {RangeError} when a duration is negative or not finite, or the minimum is not a whole number from 1.
 */
export function arrivalRange(
  minutes: readonly number[],
  minimumCount: number = ARRIVAL_MINIMUM_COUNT,
): ArrivalRange | null {
  if (!Number.isInteger(minimumCount) || minimumCount < 1) {
    throw new RangeError(`minimum count must be a whole number from 1, got ${minimumCount}`)
  }
  if (minutes.some((one) => !Number.isFinite(one) || one < 0)) {
    throw new RangeError('durations must be finite and not negative')
  }
  if (minutes.length < minimumCount) return null
  return {
    medianMinutes: quantile(minutes, 0.5),
    nineInTenMinutes: quantile(minutes, 0.9),
    count: minutes.length,
  }
}
