import type { CallView, ItemView } from '@bellpull/contracts'
import { CATEGORY_RULES, compareUrgency } from '@bellpull/domain'
import { isLateRow } from '@/components/calls/board/rows'
import { timingOf } from '@/composables/item'

/** One line of the walk: an item and the call it belongs to. */
export interface FetchLine {
  readonly call: CallView
  readonly item: ItemView
  readonly late: boolean
}

export interface FetchList {
  /** To be taken out of a bin, in walking order. */
  readonly walk: readonly FetchLine[]
  /** Held packages that stand in the room already: one scan there and they count as in the room. */
  readonly inTheRoom: readonly FetchLine[]
  /** Without a bin: called in words, or not kept by package. */
  readonly withoutBin: readonly FetchLine[]
  readonly noneFree: readonly FetchLine[]
  /** Pulled and not yet in the room, the longest there first. */
  readonly hatch: readonly FetchLine[]
  readonly putBacks: readonly FetchLine[]
}

const byUrgency = (a: FetchLine, b: FetchLine): number =>
  compareUrgency(timingOf(a.call), timingOf(b.call)) || a.item.id.localeCompare(b.item.id)

const byWalk = (a: FetchLine, b: FetchLine): number =>
  (a.item.walkOrder ?? Infinity) - (b.item.walkOrder ?? Infinity) || byUrgency(a, b)

/** The most urgent of some lines, or nothing. */
export const mostUrgent = (lines: readonly FetchLine[]): FetchLine | undefined =>
  [...lines].sort(byUrgency)[0]

/** What is to be fetched, brought on and put back, out of all open calls. */
export function fetchList(calls: Iterable<CallView>, nowMs: number): FetchList {
  const list: Record<keyof FetchList, FetchLine[]> = {
    walk: [],
    inTheRoom: [],
    withoutBin: [],
    noneFree: [],
    hatch: [],
    putBacks: [],
  }
  for (const call of calls)
    for (const item of call.items) {
      const place = placeOf(item)
      if (place) list[place].push({ call, item, late: isLateRow(call, item, nowMs) })
    }
  return {
    walk: list.walk.sort(byWalk),
    inTheRoom: list.inTheRoom.sort(byUrgency),
    withoutBin: list.withoutBin.sort(byUrgency),
    noneFree: list.noneFree.sort(byUrgency),
    hatch: list.hatch.sort(
      (a, b) => (a.item.pulledAt ?? '').localeCompare(b.item.pulledAt ?? '') || byUrgency(a, b),
    ),
    putBacks: list.putBacks.sort(
      (a, b) => (a.item.putBack?.walkOrder ?? 0) - (b.item.putBack?.walkOrder ?? 0),
    ),
  }
}

function placeOf(item: ItemView): keyof FetchList | null {
  if (item.outcome !== null) return item.putBack ? 'putBacks' : null
  if (item.stage === 'pulled') return 'hatch'
  if (item.stage !== 'called' && item.stage !== 'accepted') return null
  if (item.hold === 'noneFree') return 'noneFree'
  if (!CATEGORY_RULES[item.category].holdsUnit || item.unit === null) return 'withoutBin'
  return item.unit.location.zone === 'room' ? 'inTheRoom' : 'walk'
}
