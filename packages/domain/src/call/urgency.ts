import type { CallKind, Hold, Outcome, Stage } from './categories.js'

/** The groups of the board, in the order in which they are shown. */
export const BOARD_GROUPS = ['noneFree', 'waiting', 'onTheWay', 'inTheRoom', 'putBack'] as const
export type BoardGroup = (typeof BOARD_GROUPS)[number]

export interface BoardItem {
  readonly stage: Stage
  readonly outcome: Outcome | null
  readonly hold: Hold
  readonly putBackPending: boolean
}

/** The group in which an item stands on the board; `null` once nothing is left to do for it. */
export function boardGroup(item: BoardItem): BoardGroup | null {
  if (item.outcome !== null) return item.putBackPending ? 'putBack' : null
  if (item.stage === 'called') return item.hold === 'noneFree' ? 'noneFree' : 'waiting'
  if (item.stage === 'accepted' || item.stage === 'pulled') return 'onTheWay'
  return 'inTheRoom'
}

export interface Timing {
  readonly kind: CallKind
  /** Instants in milliseconds since the epoch. */
  readonly calledAtMs: number
  /** When an early or stand-by call became confirmed; left out or `null` for a call that was made confirmed. */
  readonly confirmedAtMs?: number | null
  /** `null` for stand by: needed when asked for. */
  readonly neededAtMs: number | null
}

/** Start values, common practice, no source: a house may set its own. */
export const ESCALATE_AFTER_MS = [60_000, 120_000, 240_000] as const

/** A call counts as *now* when it is confirmed and wanted in less than this: *in 1 minute* is not *now*. */
export const NOW_WITHIN_MS = 60_000

/** When the call was last spoken: confirmed, or else made. */
const spokenAtMs = (call: Timing): number => call.confirmedAtMs ?? call.calledAtMs

export const isNowCall = (call: Timing): boolean =>
  call.kind === 'confirmed' && call.neededAtMs !== null && call.neededAtMs - spokenAtMs(call) < NOW_WITHIN_MS

/**
 * How often a call that nobody has accepted has come forward: 0 not yet, 1 repeated quietly,
 * 2 the charge nurse has it, 3 again. *Now* calls count from the moment they were made or confirmed; others
 * from the time needed less the expected arrival, never from before they were spoken; stand by never comes
 * forward.
 *
 * @param expectedArrivalMs how long the way usually takes, in milliseconds.
 */
export function escalationLevel(call: Timing, nowMs: number, expectedArrivalMs: number): 0 | 1 | 2 | 3 {
  if (call.neededAtMs === null || call.kind === 'standby') return 0
  const spoken = spokenAtMs(call)
  const from = isNowCall(call) ? spoken : Math.max(spoken, call.neededAtMs - expectedArrivalMs)
  const waited = nowMs - from
  const level = ESCALATE_AFTER_MS.filter((limit) => waited >= limit).length
  return level as 0 | 1 | 2 | 3
}

/** Late: the time at which the call was needed has passed and the package is not yet in the room. */
export function isLate(item: BoardItem, call: Timing, nowMs: number): boolean {
  if (item.outcome !== null || call.neededAtMs === null) return false
  return nowMs > call.neededAtMs && ['called', 'accepted', 'pulled'].includes(item.stage)
}

/** Soonest needed first, stand by last, older call first between equals. */
export function compareUrgency(a: Timing, b: Timing): number {
  const needed = (call: Timing) => call.neededAtMs ?? Number.POSITIVE_INFINITY
  const byNeed = needed(a) - needed(b)
  // Two stand-by calls: infinity less infinity is not a number.
  return (Number.isNaN(byNeed) ? 0 : byNeed) || a.calledAtMs - b.calledAtMs
}
