/** The q-quantile of numbers in order of size, by nearest rank. */
export const quantileOf = (sorted: readonly number[] | Float64Array, q: number): number =>
  sorted[Math.min(sorted.length - 1, Math.max(0, Math.ceil(q * sorted.length) - 1))] ?? Number.NaN

/** The middle number; of two middle ones the mean. */
export function medianOf(numbers: readonly number[]): number {
  const sorted = [...numbers].sort((a, b) => a - b)
  const half = sorted.length / 2
  return ((sorted[Math.ceil(half) - 1] ?? Number.NaN) + (sorted[Math.floor(half)] ?? Number.NaN)) / 2
}
