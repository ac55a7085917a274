/** Who owns a package; also the order of preference between packages that are otherwise equal. */
export const OWNERS = ['owned', 'consigned', 'loaner'] as const
export type Owner = (typeof OWNERS)[number]

/** A usable package that might be held. */
export interface Candidate {
  readonly id: string
  /** Last day on which it may be used, `YYYY-MM-DD`. */
  readonly useByOn: string
  /** Already in the room that calls; packages in other rooms are never candidates. */
  readonly inRoom: boolean
  /** Walking order of its place; smaller is nearer. In the room: 0. */
  readonly walkOrder: number
  readonly owner: Owner
}

export interface ChooseOptions {
  /** The call is wanted now. */
  readonly now: boolean
  /** Last day, `YYYY-MM-DD`, on which a use-by date counts as soon: the house's day plus its setting. */
  readonly soonUntil: string
}

/** House setting: a package that expires within this many days goes before one that is already in the room. */
export const EXPIRES_SOON_DAYS = 30

/**
 * Orders usable packages as they are to be held: first to expire, then the nearest, then by owner.
 * A *now* call takes what is already in the room first, unless another package expires soon.
 *
 * The statement that holds packages (`make-call.sql.ts` in the API) sorts by the same rule; a test
 * compares the two.
 */
export function compareCandidates(options: ChooseOptions): (a: Candidate, b: Candidate) => number {
  const place = (unit: Candidate) => (unit.inRoom ? 0 : unit.walkOrder)
  const rush = (unit: Candidate) =>
    !options.now || unit.useByOn <= options.soonUntil ? 0 : unit.inRoom ? 1 : 2
  return (a, b) =>
    rush(a) - rush(b) ||
    a.useByOn.localeCompare(b.useByOn) ||
    place(a) - place(b) ||
    OWNERS.indexOf(a.owner) - OWNERS.indexOf(b.owner) ||
    a.id.localeCompare(b.id)
}

/** The first `count` packages to hold, or fewer when there are not so many; the input is not modified. */
export function chooseUnits<U extends Candidate>(
  units: readonly U[],
  count: number,
  options: ChooseOptions,
): U[] {
  if (!Number.isInteger(count) || count < 0)
    throw new RangeError(`count must be a whole number, got ${count}`)
  return [...units].sort(compareCandidates(options)).slice(0, count)
}
