import { describe, expect, it } from 'vitest'
import { closingLine, one, tallyPlaywright, tallyVitest, total } from './tally.js'

const vitest = (numPassedTests: number, numFailedTests: number, rest: object = {}) => ({
  numPassedTests,
  numFailedTests,
  numPendingTests: 0,
  numTodoTests: 0,
  testResults: [],
  ...rest,
})
const file = (status: string, ...tests: string[]) => ({
  status,
  assertionResults: tests.map((each) => ({ status: each })),
})

describe('a report of Vitest', () => {
  it.each([
    ['tests that passed', vitest(7, 0), 0, { passed: 7, failed: 0, skipped: 0 }],
    [
      'tests that failed',
      vitest(5, 2, { testResults: [file('failed', 'failed', 'passed')] }),
      1,
      { passed: 5, failed: 2, skipped: 0 },
    ],
    [
      'tests left out',
      vitest(3, 0, { numPendingTests: 1, numTodoTests: 1 }),
      0,
      { passed: 3, failed: 0, skipped: 2 },
    ],
    [
      'a file that does not load',
      vitest(3, 0, { testResults: [file('failed')] }),
      1,
      { passed: 3, failed: 1, skipped: 0 },
    ],
    [
      'a file that does not load beside a failed test',
      vitest(3, 1, { testResults: [file('failed'), file('failed', 'failed')] }),
      1,
      { passed: 3, failed: 2, skipped: 0 },
    ],
    ['an error outside every test', vitest(3, 0), 1, { passed: 3, failed: 1, skipped: 0 }],
    ['no test at all', vitest(0, 0), 0, { passed: 0, failed: 1, skipped: 0 }],
    ['no report', null, 1, { passed: 0, failed: 1, skipped: 0 }],
  ])('counts %s', (_title, report, exitCode, expected) => {
    expect(tallyVitest(report, exitCode)).toEqual(expected)
  })
})

describe('a report of Playwright', () => {
  const stats = (expected: number, unexpected: number, flaky: number, skipped: number) => ({
    stats: { expected, unexpected, flaky, skipped },
  })
  it.each([
    ['journeys that passed', stats(4, 0, 0, 0), 0, { passed: 4, failed: 0, skipped: 0 }],
    ['one that failed', stats(3, 1, 0, 0), 1, { passed: 3, failed: 1, skipped: 0 }],
    [
      'one that passed at the second try as failed',
      stats(3, 0, 1, 0),
      0,
      { passed: 3, failed: 1, skipped: 0 },
    ],
    ['one left out', stats(3, 0, 0, 1), 0, { passed: 3, failed: 0, skipped: 1 }],
    ['a set-up that broke', stats(0, 0, 0, 0), 1, { passed: 0, failed: 1, skipped: 0 }],
    ['a killed runner without a report', null, null, { passed: 0, failed: 1, skipped: 0 }],
  ])('counts %s', (_title, report, exitCode, expected) => {
    expect(tallyPlaywright(report, exitCode)).toEqual(expected)
  })
})

describe('the closing line', () => {
  it('adds all rungs together', () => {
    expect(closingLine(total([one(true), one(false), { passed: 10, failed: 2, skipped: 0 }]))).toBe(
      '11 passed, 3 failed',
    )
  })
  it('names tests left out only where there are some', () => {
    expect(closingLine({ passed: 1, failed: 0, skipped: 2 })).toBe('1 passed, 0 failed, 2 skipped')
  })
})
