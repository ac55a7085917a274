import type { CallView, ItemView } from '@bellpull/contracts'
import {
  boardGroup,
  isLate,
  type BoardGroup,
  type BoardItem,
  type ItemState,
  type Timing,
} from '@bellpull/domain'

/** What of an item says where it stands. */
type Standing = Pick<ItemView, 'category' | 'stage' | 'outcome' | 'putBack'>

/** An item as the lifecycle table asks for it: `commandsFor(stateOf(item), role)`. */
export const stateOf = (item: Standing): ItemState => ({
  category: item.category,
  stage: item.stage,
  outcome: item.outcome,
  putBackPending: item.putBack !== null,
})

const boardItemOf = (item: Standing & Pick<ItemView, 'hold'>): BoardItem => ({
  ...stateOf(item),
  hold: item.hold,
})

export const timingOf = (call: CallView): Timing => ({
  kind: call.kind,
  calledAtMs: Date.parse(call.calledAt),
  confirmedAtMs: call.confirmedAt === null ? null : Date.parse(call.confirmedAt),
  neededAtMs: call.neededAt === null ? null : Date.parse(call.neededAt),
})

/** The group of the board in which the item stands; `null` once nothing is left to do for it. */
export const groupOf = (item: Standing & Pick<ItemView, 'hold'>): BoardGroup | null =>
  boardGroup(boardItemOf(item))

/** The time at which it was needed has passed and it is not in the room. */
export const isItemLate = (item: ItemView, call: CallView, nowMs: number): boolean =>
  isLate(boardItemOf(item), timingOf(call), nowMs)

/** Still called, and no package could be held for it. */
export const isNoneFree = (item: Standing & Pick<ItemView, 'hold'>): boolean => groupOf(item) === 'noneFree'

/** What is said of an item: "Head 50 concentric". */
export const nameOf = (item: Pick<ItemView, 'label' | 'variant'>): string =>
  item.variant === null || item.label.includes(item.variant) ? item.label : `${item.label} ${item.variant}`

/** The same inside a sentence: "head 50 concentric"; what begins with two capitals or a figure stays. */
export const inSentence = (name: string): string =>
  /^[A-Z][a-z]/.test(name) ? name.charAt(0).toLowerCase() + name.slice(1) : name
