import type { CallView, ItemView } from '@bellpull/contracts'
import { CATEGORY_RULES, commandsFor, type ItemCommandName, type Role } from '@bellpull/domain'
import { stateOf } from '@/composables/item'

/** What this tablet settles; fetching and verifying have screens of their own. */
const HERE: readonly ItemCommandName[] = ['implant', 'use', 'notImplanted', 'putBack']

/**
 * What somebody of this role may do here with an item, in the order in which the job goes. What has left its
 * bin is put back rather than cancelled, where the role may; both lead it to its bin.
 */
export function commandsHere(item: ItemView, role: Role): ItemCommandName[] {
  const may = commandsFor(stateOf(item), role)
  const here = HERE.filter((command) => may.includes(command))
  return may.includes('cancel') && !here.includes('putBack') ? [...here, 'cancel'] : here
}

/** Since when the item stands where it stands. */
export function sinceOf(item: ItemView, call: CallView): string {
  if (item.outcome !== null) return item.settledAt ?? call.calledAt
  const at: Record<ItemView['stage'], string | null> = {
    called: call.calledAt,
    accepted: item.acceptedAt,
    pulled: item.pulledAt,
    inRoom: item.inRoomAt,
    verified: item.verifiedAt,
    opened: item.openedAt,
  }
  return at[item.stage] ?? call.calledAt
}

export const isOpenItem = (item: ItemView): boolean => item.outcome === null

/** Items that are the same product at the same place of the same call stand in one row. */
export interface ItemRow {
  readonly key: string
  readonly call: CallView
  readonly items: readonly ItemView[]
}

/** Rows of a call: what is called in number stands once, as long as it goes the same way. */
export function rowsOfCall(call: CallView): ItemRow[] {
  const likeness = (item: ItemView): string =>
    item.catalogueItemId === null || CATEGORY_RULES[item.category].check === 'two-people'
      ? item.id
      : [item.catalogueItemId, item.stage, item.outcome, item.hold, item.acceptedBy?.id].join()
  const rows = new Map<string, ItemView[]>()
  for (const item of call.items) {
    const same = rows.get(likeness(item))
    if (same) same.push(item)
    else rows.set(likeness(item), [item])
  }
  return [...rows.values()].map((items) => ({ key: items[0]!.id, call, items }))
}

const newestFirst = (a: CallView, b: CallView): number => b.calledAt.localeCompare(a.calledAt)

/** How long a call that was taken back stays in view as the last one: as long as it can be brought back. */
const STAYS_MS = 2 * 60_000

/** The call that stays on screen: the newest with something open, or the newest if it has just been settled. */
export function lastCallOf(calls: readonly CallView[], nowMs: number): CallView | null {
  const sorted = [...calls].sort(newestFirst)
  const newest = sorted[0]
  if (newest && justSettled(newest, nowMs)) return newest
  return sorted.find((call) => call.items.some(isWanted)) ?? null
}

/** Still asked for, and not on the table yet. */
const isWanted = (item: ItemView): boolean => item.outcome === null && item.stage !== 'opened'

const justSettled = (call: CallView, nowMs: number): boolean =>
  call.items.every((item) => item.settledAt !== null && nowMs - Date.parse(item.settledAt) < STAYS_MS)

/** Open items first, the newest call first; then what is settled, the latest first. */
export function rowsOfCase(calls: readonly CallView[]): { open: ItemRow[]; settled: ItemRow[] } {
  const rows = [...calls].sort(newestFirst).flatMap(rowsOfCall)
  const isOpenRow = (row: ItemRow): boolean => row.items.some(isOpenItem)
  return {
    open: rows.filter(isOpenRow),
    settled: rows
      .filter((row) => !isOpenRow(row))
      .sort((a, b) => sinceOf(b.items[0]!, b.call).localeCompare(sinceOf(a.items[0]!, a.call))),
  }
}

/** "J. Penhallick": enough to call across a room. */
export function shortName(name: string): string {
  const [first = '', ...rest] = name.split(' ')
  return rest.length === 0 ? first : `${first.charAt(0)}. ${rest.join(' ')}`
}
