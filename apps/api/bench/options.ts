import { parseArgs } from 'node:util'

/** How much is measured. */
export interface Options {
  readonly build: boolean
  readonly pairs: number
  /** Length of one half of a pair, in milliseconds, and how long it runs before that unmeasured. */
  readonly measuredMs: number
  readonly warmMs: number
  /** Calls in one half of a pair of the pushes. */
  readonly pushCalls: number
  readonly audiences: readonly number[]
  readonly manyUnits: number
  readonly manyPast: number
  readonly growthCalls: number
  readonly memoryListeners: number
  /** Names of the parts to run. */
  readonly parts: ReadonlySet<Part>
}

export const PARTS = ['calls', 'push', 'crash', 'growth', 'memory'] as const
export type Part = (typeof PARTS)[number]

const NORMAL = {
  pairs: 5,
  measuredMs: 2_500,
  warmMs: 500,
  pushCalls: 1_000,
  audiences: [500],
  manyUnits: 100_000,
  manyPast: 100_000,
  growthCalls: 100,
  memoryListeners: 1_000,
}
const QUICK = {
  ...NORMAL,
  measuredMs: 1_000,
  warmMs: 250,
  pushCalls: 150,
  manyUnits: 20_000,
  manyPast: 20_000,
  growthCalls: 40,
}
const FULL = {
  ...NORMAL,
  measuredMs: 5_000,
  audiences: [500, 2_000],
  manyUnits: 1_000_000,
  manyPast: 1_000_000,
  memoryListeners: 2_000,
}

export const USAGE = `pnpm bench [--quick | --full] [--only calls,push,crash,growth,memory] [--no-build]

Measures Bellpull against a minimal server that does the same work, on a PostgreSQL of its own with every promise of
durability kept, and writes apps/api/bench/RESULT.md. Ends with 1 when a goal is missed.

  --quick     a short try (a minute and a half); says little about the slowest hundredth
  --full      a million packages and past calls, 2,000 listeners as well (half an hour)
  --only      some parts alone; RESULT.md is left as it is
  --no-build  measures what was built last
`

/** @throws {TypeError} for an option that is not known. */
export function readOptions(args: string[]): Options | 'help' {
  const { values } = parseArgs({
    args: args.filter((argument) => argument !== '--'),
    options: {
      quick: { type: 'boolean', default: false },
      full: { type: 'boolean', default: false },
      only: { type: 'string' },
      'no-build': { type: 'boolean', default: false },
      help: { type: 'boolean', short: 'h', default: false },
    },
  })
  if (values.help) return 'help'
  const parts = (values.only?.split(',') ?? PARTS).map((name) => {
    const part = PARTS.find((known) => known === name)
    if (!part) throw new TypeError(`there is no part "${name}": ${PARTS.join(', ')}`)
    return part
  })
  const amounts = values.quick ? QUICK : values.full ? FULL : NORMAL
  return { ...amounts, build: !values['no-build'], parts: new Set(parts) }
}
