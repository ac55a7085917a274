/** `k` of `n`, with an interval that holds the true share with the stated confidence. Fractions 0 to 1. */
export interface Proportion {
  readonly k: number
  readonly n: number
  readonly low: number
  readonly high: number
}

/** Standard normal quantiles for the two confidences in use. */
const Z = { 0.9: 1.6448536269514722, 0.95: 1.959963984540054 } as const
export type Confidence = keyof typeof Z

/**
 * Wilson's score interval for a proportion. Unlike the textbook normal interval it stays inside [0, 1]
 * and says something at 0 of n and n of n.
 *
 * @throws {RangeError} unless k and n are whole numbers with 0 ≤ k ≤ n and n ≥ 1.
 * @see Newcombe RG. Two-sided confidence intervals for the single proportion. Stat Med 1998;17:857-872,
 *   method 3 (without continuity correction).
 */
export function wilsonInterval(k: number, n: number, confidence: Confidence = 0.95): Proportion {
  if (!Number.isInteger(k) || !Number.isInteger(n) || n < 1 || k < 0 || k > n) {
    throw new RangeError(`needs whole numbers with 0 <= k <= n and n >= 1, got ${k} of ${n}`)
  }
  const z2 = Z[confidence] ** 2
  const share = k / n
  const middle = (share + z2 / (2 * n)) / (1 + z2 / n)
  const half = (Z[confidence] / (1 + z2 / n)) * Math.sqrt((share * (1 - share)) / n + z2 / (4 * n * n))
  // At the two ends the bound is exactly 0 or 1; rounding in the formula must not leave 1e-17 beside it.
  return {
    k,
    n,
    low: k === 0 ? 0 : Math.max(0, middle - half),
    high: k === n ? 1 : Math.min(1, middle + half),
  }
}
