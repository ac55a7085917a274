import { medianOf } from './numbers.js'

/** One row of the yardstick. */
export interface Goal {
  readonly name: string
  /** A ratio where `unit` is `x`, else an amount. */
  readonly must: number
  readonly aim: number
  readonly better: 'more' | 'less'
  readonly unit: 'x' | 'kB' | ''
}
export interface Reached {
  readonly goal: Goal
  readonly value: number
  /** What the two sides showed, for orientation. */
  readonly note: string
}

export const GOALS = {
  rate8: { name: 'calls per second, 8 at once', must: 0.5, aim: 0.75, better: 'more', unit: 'x' },
  rate32: { name: 'calls per second, 32 at once', must: 0.6, aim: 0.85, better: 'more', unit: 'x' },
  p50: { name: 'call p50, one at a time', must: 2, aim: 1.4, better: 'less', unit: 'x' },
  p99: { name: 'call p99, 8 at once', must: 2.5, aim: 1.5, better: 'less', unit: 'x' },
  units: { name: 'call p50, many units over 1,000', must: 1.5, aim: 1.2, better: 'less', unit: 'x' },
  pastCalls: { name: 'call p50, many past calls over none', must: 1.5, aim: 1.15, better: 'less', unit: 'x' },
  board: {
    name: 'board snapshot p50, 200 open, many past calls over none',
    must: 1.5,
    aim: 1.15,
    better: 'less',
    unit: 'x',
  },
  memory: { name: 'memory per listener', must: 40, aim: 22, better: 'less', unit: 'kB' },
  broken: { name: 'lost calls, doubled holds, lost events', must: 0, aim: 0, better: 'less', unit: '' },
} as const satisfies Record<string, Goal>

export const pushGoals = (listeners: number): { p50: Goal; p99: Goal } => ({
  p50: {
    name: `tap to listener p50, ${listeners} listeners`,
    must: 1.6,
    aim: 1.25,
    better: 'less',
    unit: 'x',
  },
  p99: { name: `tap to listener p99, ${listeners} listeners`, must: 2, aim: 1.35, better: 'less', unit: 'x' },
})

const holds = (goal: Goal, value: number, limit: number): boolean =>
  goal.better === 'more' ? value >= limit : value <= limit

export const isMissed = ({ goal, value }: Reached): boolean => !holds(goal, value, goal.must)

const shown = (goal: Goal, value: number): string =>
  goal.unit === 'x'
    ? value.toFixed(2) + (goal.better === 'less' ? 'x' : '')
    : `${Math.round(value)} ${goal.unit}`.trim()

/** The table as Markdown; its columns are padded, so that it reads well on a terminal too. */
export function table(reached: readonly Reached[]): string {
  const rows = reached.map((row) => {
    const { goal, value, note } = row
    const sign = goal.must === 0 ? '' : goal.better === 'more' ? '≥ ' : '≤ '
    const word = isMissed(row) ? 'MISSED' : holds(goal, value, goal.aim) ? 'aim' : 'must'
    return [
      goal.name,
      sign + shown(goal, goal.must),
      sign + shown(goal, goal.aim),
      `${shown(goal, value)} (${word})`,
      note,
    ]
  })
  return markdown(['goal', 'must', 'aim', 'reached', 'for orientation'], rows)
}

export function markdown(head: readonly string[], rows: ReadonlyArray<readonly string[]>): string {
  const widths = head.map((cell, n) => Math.max(cell.length, ...rows.map((row) => row[n]?.length ?? 0)))
  const line = (cells: readonly string[]): string =>
    `| ${cells.map((cell, n) => cell.padEnd(widths[n] ?? 0)).join(' | ')} |`
  return [line(head), `| ${widths.map((width) => '-'.repeat(width)).join(' | ')} |`, ...rows.map(line)].join(
    '\n',
  )
}

/** A ratio of two sides, as the median over the pairs, with the medians of both. */
export function compare<T>(
  goal: Goal,
  pairs: ReadonlyArray<{ ours: T; theirs: T }>,
  value: (half: T) => number,
  say: (ours: number, theirs: number) => string,
): Reached {
  return {
    goal,
    value: medianOf(pairs.map(({ ours, theirs }) => value(ours) / value(theirs))),
    note: say(
      medianOf(pairs.map(({ ours }) => value(ours))),
      medianOf(pairs.map(({ theirs }) => value(theirs))),
    ),
  }
}
