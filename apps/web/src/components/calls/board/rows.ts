import type { CallView, ItemView } from '@bellpull/contracts'
import {
  BOARD_GROUPS,
  compareUrgency,
  escalationLevel,
  isNowCall,
  type BoardGroup,
  type Role,
} from '@bellpull/domain'
import { groupOf, isItemLate, timingOf } from '@/composables/item'
import { oneWalk } from './walk'

/** Until the house has learnt its own ways: minutes from bin to room. Common practice, no source. */
export const EXPECTED_ARRIVAL_MS = 6 * 60_000

/** A *now* call is needed the moment it is made: it is not called late before this has passed. */
export const NOW_GRACE_MS = 60_000

/** A section of the board: the domain's groups, and before them what the charge nurse has to see first. */
export type Section = BoardGroup | 'forward'

export interface BoardRow {
  readonly call: CallView
  readonly item: ItemView
  readonly late: boolean
  /** How often it has come forward because nobody accepted it. */
  readonly escalation: 0 | 1 | 2 | 3
  /** The items that one walk brings, this one among them; empty when it goes alone. */
  readonly walk: readonly ItemView[]
}

export interface BoardSection {
  readonly section: Section
  readonly rows: readonly BoardRow[]
}

export interface BoardView {
  readonly role: Role
  /** Rooms to show; `null` for all. */
  readonly roomIds: ReadonlySet<string> | null
  readonly nowMs: number
  readonly arrivalMs?: number
  /** Cases in a marked time-out: nothing of theirs comes forward. */
  readonly quietCaseIds?: ReadonlySet<string>
}

/** Late, as the board says it: a *now* call has its minute first. */
export function isLateRow(call: CallView, item: ItemView, nowMs: number): boolean {
  return isItemLate(item, call, nowMs - (isNowCall(timingOf(call)) ? NOW_GRACE_MS : 0))
}

/**
 * Open items as the board shows them: by group, in a group what has come forward first, then soonest needed,
 * the items of one call together in walking order.
 */
export function boardSections(calls: Iterable<CallView>, view: BoardView): BoardSection[] {
  const sections = new Map<Section, BoardRow[]>()
  for (const call of calls) {
    if (view.roomIds !== null && !view.roomIds.has(call.room.id)) continue
    const walk = oneWalk(call)
    for (const item of call.items) {
      const group = groupOf(item)
      if (group === null) continue
      const escalation = group === 'waiting' ? comesForward(call, view) : 0
      const row: BoardRow = {
        call,
        item,
        escalation,
        late: isLateRow(call, item, view.nowMs),
        walk: walk.includes(item) ? walk : [],
      }
      const section: Section = view.role === 'charge' && escalation >= 2 ? 'forward' : group
      sections.set(section, [...(sections.get(section) ?? []), row])
    }
  }
  return (['forward', ...BOARD_GROUPS] as const).flatMap((section) => {
    const rows = sections.get(section)
    return rows ? [{ section, rows: rows.sort(compareRows) }] : []
  })
}

const comesForward = (call: CallView, view: BoardView): 0 | 1 | 2 | 3 =>
  view.quietCaseIds?.has(call.caseId)
    ? 0
    : escalationLevel(timingOf(call), view.nowMs, view.arrivalMs ?? EXPECTED_ARRIVAL_MS)

const compareRows = (a: BoardRow, b: BoardRow): number =>
  // One repeat is enough to stand first; further ones must not shuffle what is already there.
  Math.min(b.escalation, 1) - Math.min(a.escalation, 1) ||
  compareUrgency(timingOf(a.call), timingOf(b.call)) ||
  a.call.id.localeCompare(b.call.id) ||
  (a.item.walkOrder ?? 0) - (b.item.walkOrder ?? 0) ||
  a.call.items.indexOf(a.item) - b.call.items.indexOf(b.item)

export interface Counts {
  readonly noneFree: number
  readonly waiting: number
  readonly moving: number
  readonly putBack: number
}

/** How many items stand where, for the sentence at the head. */
export function countsOf(sections: readonly BoardSection[]): Counts {
  const count = (...names: Section[]) =>
    sections.filter(({ section }) => names.includes(section)).reduce((sum, { rows }) => sum + rows.length, 0)
  return {
    noneFree: count('noneFree'),
    waiting: count('waiting', 'forward'),
    moving: count('onTheWay', 'inTheRoom'),
    putBack: count('putBack'),
  }
}

/** Items of a section in blocks: what one walk brings is one block, everything else stands alone. */
export function blocksOf(rows: readonly BoardRow[]): BoardRow[][] {
  const blocks: BoardRow[][] = []
  for (const row of rows) {
    const last = blocks.at(-1)
    const before = last?.[0]
    if (last && before && row.walk.length > 0 && before.call.id === row.call.id && before.walk.length > 0)
      last.push(row)
    else blocks.push([row])
  }
  return blocks
}
