import { randomInt } from 'node:crypto'

/** What both houses hold: the same ids, so that one plan of calls fits the two of them. */
export const ROOMS = 8
export const SURGEONS = 8
/** Enough that nobody comes near the house's limit of calls a person. */
export const CALLERS = 800
/** Half of them heads, half stems; a call asks for one of each. */
export const PRODUCTS = 200
/** A real case makes a handful of calls; each new call looks at the parts of the ones before it. */
export const CALLS_A_CASE = 4

export type Kind = (typeof KINDS)[number]

const KINDS = [
  'room',
  'location',
  'supplier',
  'system',
  'product',
  'person',
  'session',
  'case',
  'pastCase',
  'pastCall',
  'pastItem',
  'pastUnit',
] as const

/** The id of the n-th thing of a kind, n from 1. */
export const idOf = (kind: Kind, n: number): string => `${prefix(kind)}${n.toString(16).padStart(12, '0')}`

/** The same as {@link idOf}, as an SQL expression over a number from 1. */
export const idSql = (kind: Kind, n: string): string =>
  `('${prefix(kind)}' || lpad(to_hex((${n})::int), 12, '0'))::uuid`

const prefix = (kind: Kind): string => `${String(KINDS.indexOf(kind) + 1).padStart(8, '0')}-0000-4000-8000-`

/** One tap: what is sent, and by whom. */
export interface TapPlan {
  readonly person: number
  readonly caseId: string
  readonly body: string
}

/**
 * Deals out taps, spread evenly over rooms and people; products at random. Rooms have cases n, n + 8, n + 16, ...
 *
 * @param cases how many cases the house has.
 */
export class Taps {
  #dealt = 0

  constructor(
    private readonly cases: number,
    private readonly products = PRODUCTS,
  ) {}

  next(): TapPlan {
    const n = this.#dealt++
    const round = Math.floor(n / (ROOMS * CALLS_A_CASE))
    const caseNumber = round * ROOMS + (n % ROOMS) + 1
    if (caseNumber > this.cases) throw new Error(`the house has only ${this.cases} cases`)
    const product = (odd: 0 | 1): string => idOf('product', randomInt(this.products / 2) * 2 + 1 + odd)
    return {
      person: n % CALLERS,
      caseId: idOf('case', caseNumber),
      body: JSON.stringify({
        kind: 'confirmed',
        neededInMinutes: 15,
        calledBy: idOf('person', (n % SURGEONS) + 1),
        side: 'left',
        items: [
          { catalogueItemId: product(0), quantity: 1 },
          { catalogueItemId: product(1), quantity: 1 },
        ],
      }),
    }
  }
}

/** The id of the n-th caller, n from 0; callers stand behind the surgeons. */
export const callerId = (n: number): string => idOf('person', SURGEONS + 1 + n)
export const sessionId = (n: number): string => idOf('session', n + 1)
