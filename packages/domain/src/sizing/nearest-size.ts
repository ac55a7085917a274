/** A catalogue size beside what was measured. */
export interface SizeNearby<S> {
  readonly size: S
  /** Size less measurement in mm: negative when the size is smaller. */
  readonly differenceMm: number
}

export interface NearestSizes<S> {
  /** The sizes that equal the measurement; then `below` and `above` are their neighbours. */
  readonly exact: readonly S[]
  /** The nearest smaller size, with every variant that has it; empty when there is none. */
  readonly below: readonly SizeNearby<S>[]
  /** The nearest larger size, with every variant that has it; empty when there is none. */
  readonly above: readonly SizeNearby<S>[]
}

/** Finer than any rule or caliper; two figures within it are one size. */
const SAME_MM = 1e-6

/**
 * The catalogue sizes next below and next above a measured length, with the difference in mm.
 * Arithmetic only: it says what lies nearby, not what to use.
 *
 * @param sizes any order; several may share a size (variants); not modified.
 * @param mmOf the length of a size in mm.
 * @param measuredMm what was measured, in mm.
 * @throws {RangeError} when the measurement is not above 0, or a size has a length that is not finite.
 */
export function nearestSizes<S>(
  sizes: readonly S[],
  mmOf: (size: S) => number,
  measuredMm: number,
): NearestSizes<S> {
  if (!Number.isFinite(measuredMm) || measuredMm <= 0) {
    throw new RangeError(`measurement must be more than 0 mm, got ${measuredMm}`)
  }
  const all = sizes.map((size) => ({ size, differenceMm: mmOf(size) - measuredMm }))
  if (all.some((one) => !Number.isFinite(one.differenceMm))) throw new RangeError('a size has no length')

  const closest = (candidates: SizeNearby<S>[]): SizeNearby<S>[] => {
    const least = Math.min(...candidates.map((one) => Math.abs(one.differenceMm)))
    return candidates.filter((one) => Math.abs(one.differenceMm) - least <= SAME_MM)
  }
  return {
    exact: all.filter((one) => Math.abs(one.differenceMm) <= SAME_MM).map((one) => one.size),
    below: closest(all.filter((one) => one.differenceMm < -SAME_MM)),
    above: closest(all.filter((one) => one.differenceMm > SAME_MM)),
  }
}
