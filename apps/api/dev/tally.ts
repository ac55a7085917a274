/** How many tests of one rung passed, failed and were left out. */
export interface Tally {
  readonly passed: number
  readonly failed: number
  readonly skipped: number
}

/** One check that is a single yes or no. */
export const one = (passed: boolean): Tally => ({
  passed: passed ? 1 : 0,
  failed: passed ? 0 : 1,
  skipped: 0,
})

const field = (value: unknown, name: string): unknown =>
  typeof value === 'object' && value !== null ? (value as Record<string, unknown>)[name] : undefined
const count = (value: unknown, name: string): number => {
  const found = field(value, name)
  return typeof found === 'number' ? found : 0
}

/** A runner that failed without a failed test (a file that does not load, no test at all) counts as one failure. */
function withExit(tally: Tally, exitCode: number | null): Tally {
  const silent = tally.failed === 0 && (exitCode !== 0 || tally.passed === 0)
  return silent ? { ...tally, failed: 1 } : tally
}

/** Reads Vitest's JSON report. `report` is null where the runner wrote none. */
export function tallyVitest(report: unknown, exitCode: number | null): Tally {
  const files = field(report, 'testResults')
  const broken = Array.isArray(files)
    ? files.filter((file) => {
        const tests = field(file, 'assertionResults')
        const ownFailures = Array.isArray(tests) && tests.some((test) => field(test, 'status') === 'failed')
        return field(file, 'status') === 'failed' && !ownFailures
      }).length
    : 0
  return withExit(
    {
      passed: count(report, 'numPassedTests'),
      failed: count(report, 'numFailedTests') + broken,
      skipped: count(report, 'numPendingTests') + count(report, 'numTodoTests'),
    },
    exitCode,
  )
}

/** Reads Playwright's JSON report. A test that passed only when it was tried again counts as failed. */
export function tallyPlaywright(report: unknown, exitCode: number | null): Tally {
  const stats = field(report, 'stats')
  return withExit(
    {
      passed: count(stats, 'expected'),
      failed: count(stats, 'unexpected') + count(stats, 'flaky'),
      skipped: count(stats, 'skipped'),
    },
    exitCode,
  )
}

export function total(tallies: readonly Tally[]): Tally {
  const sum = (of: keyof Tally) => tallies.reduce((soFar, tally) => soFar + tally[of], 0)
  return { passed: sum('passed'), failed: sum('failed'), skipped: sum('skipped') }
}

/** The closing line: `N passed, N failed`, and `, N skipped` where there are some. */
export function closingLine({ passed, failed, skipped }: Tally): string {
  return `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`
}
