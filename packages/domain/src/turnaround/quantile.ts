/**
 * The `p`-th sample quantile by linear interpolation between order statistics: position (n − 1)p, counted
 * from 0. This is definition 7 of Hyndman and Fan, the default of R and NumPy. Definition 6, as used by
 * NIST, puts a 90th percentile of few values higher.
 *
 * @param values in any order and any unit; not modified.
 * @param p fraction in [0, 1]: 0.5 is the median, 0.9 what nine in ten stay under.
 * @returns in the unit of `values`, possibly fractional; round only for display.
 * @throws {RangeError} when there are no values, one is not finite, or `p` lies outside [0, 1].
 *   A missing statistic is never reported as zero.
 * @see Hyndman RJ, Fan Y. Sample quantiles in statistical packages. Am Stat 1996;50:361-365.
 */
export function quantile(values: readonly number[], p: number): number {
  if (!(p >= 0 && p <= 1)) throw new RangeError(`p must lie in [0, 1], got ${p}`)
  if (values.some((value) => !Number.isFinite(value))) throw new RangeError('values must be finite')

  const sorted = [...values].sort((a, b) => a - b)
  const position = (sorted.length - 1) * p
  const below = sorted[Math.floor(position)]
  const above = sorted[Math.ceil(position)]
  if (below === undefined || above === undefined) throw new RangeError('no values')
  return below + (above - below) * (position - Math.floor(position))
}
