import type { CaseSide, Side } from '../call/categories.js'

export const UNIT_STATES = [
  'available',
  'held',
  'pulled',
  'inRoom',
  'putBack',
  'opened',
  'implanted',
  'used',
  'notImplanted',
  'quarantined',
  'recalled',
  'expired',
  'shippedBack',
  'writtenOff',
] as const
export type UnitState = (typeof UNIT_STATES)[number]

/** States in which a package is kept for one item. */
export const STATES_WITH_HOLD = ['held', 'pulled', 'inRoom', 'opened'] as const satisfies readonly UnitState[]

/** States from which a package does not come back: it is no longer in the house's stock. */
export const GONE_STATES = [
  'opened',
  'implanted',
  'used',
  'notImplanted',
  'shippedBack',
  'writtenOff',
] as const satisfies readonly UnitState[]

export interface UnitFacts {
  readonly state: UnitState
  /** Last day on which it may be used, `YYYY-MM-DD`; that day itself is usable. */
  readonly useByOn: string
  readonly sterile: boolean
  readonly side: Side
}

export const UNUSABLE_REASONS = [
  'unit-not-in-stock',
  'unit-recalled',
  'unit-quarantined',
  'unit-expired',
  'unit-not-sterile',
  'wrong-side',
] as const
export type UnusableReason = (typeof UNUSABLE_REASONS)[number]

/**
 * Why this package may not be held, pulled, verified or opened for a case on that side, or `null` when it may.
 *
 * @param today the house's day, `YYYY-MM-DD`. The printed day itself is usable (GS1 General Specifications:
 *   AI 17 is the last day of use; day 00 is the last day of the month, resolved when the label is read).
 */
export function whyUnusable(unit: UnitFacts, caseSide: CaseSide, today: string): UnusableReason | null {
  if ((GONE_STATES as readonly UnitState[]).includes(unit.state)) return 'unit-not-in-stock'
  if (unit.state === 'recalled') return 'unit-recalled'
  if (unit.state === 'quarantined') return 'unit-quarantined'
  if (unit.state === 'expired' || unit.useByOn < today) return 'unit-expired'
  if (!unit.sterile) return 'unit-not-sterile'
  if (unit.side !== 'either' && unit.side !== caseSide) return 'wrong-side'
  return null
}
