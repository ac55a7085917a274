/** What may be called. Blood, medicines, specimens and tissue are none of these: they have their own ways. */
export const CATEGORIES = ['implant', 'sterile', 'tray', 'other'] as const
export type Category = (typeof CATEGORIES)[number]

/** The six stations of the cord, in order. */
export const STAGES = ['called', 'accepted', 'pulled', 'inRoom', 'verified', 'opened'] as const
export type Stage = (typeof STAGES)[number]

export const OUTCOMES = [
  'implanted',
  'used',
  'notImplanted',
  'returned',
  'changed',
  'cancelled',
  'enteredInError',
] as const
export type Outcome = (typeof OUTCOMES)[number]

export const CALL_KINDS = ['early', 'confirmed', 'standby'] as const
export type CallKind = (typeof CALL_KINDS)[number]

/** `held`: a package is kept for this item. `noneFree`: none could be. `notStocked`: not kept by package. */
export const HOLDS = ['held', 'noneFree', 'notStocked'] as const
export type Hold = (typeof HOLDS)[number]

export const SIDES = ['left', 'right', 'either'] as const
export type Side = (typeof SIDES)[number]
export type CaseSide = Exclude<Side, 'either'>

export interface CategoryRule {
  /** The stations that an item of this category passes, in order. */
  readonly stages: readonly Stage[]
  /** Whether one package (or tray) is held for the item. */
  readonly holdsUnit: boolean
  /** Two people verify, or one is enough, or nothing is checked. */
  readonly check: 'two-people' | 'one-person' | 'none'
  /** The good end of an item that was opened, or delivered where nothing is opened. */
  readonly doneAs: Extract<Outcome, 'implanted' | 'used'>
}

export const CATEGORY_RULES: Readonly<Record<Category, CategoryRule>> = {
  implant: { stages: STAGES, holdsUnit: true, check: 'two-people', doneAs: 'implanted' },
  sterile: { stages: STAGES, holdsUnit: true, check: 'one-person', doneAs: 'used' },
  tray: { stages: STAGES, holdsUnit: true, check: 'one-person', doneAs: 'used' },
  other: { stages: ['called', 'accepted', 'inRoom'], holdsUnit: false, check: 'none', doneAs: 'used' },
}

/** The longest free text that may be called, in characters. */
export const FREE_TEXT_MAX = 60
