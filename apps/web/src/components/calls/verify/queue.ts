import type { CallView, ItemView } from '@bellpull/contracts'
import { CATEGORY_RULES } from '@bellpull/domain'

/** A line of the board: an item, and the call that it belongs to. */
export interface QueueRow {
  readonly call: CallView
  readonly item: ItemView
}

/** Stages at which an item is at this screen: to verify, to open, to be given its outcome. */
const HERE = ['inRoom', 'verified', 'opened'] as const satisfies readonly ItemView['stage'][]
export type QueueStage = (typeof HERE)[number]

export const isHere = (item: ItemView): boolean =>
  item.outcome === null &&
  CATEGORY_RULES[item.category].check !== 'none' &&
  (HERE as readonly string[]).includes(item.stage)

/** Everything of a room that waits at this screen, in the order in which it was called, so that no tab moves. */
export const queueOf = (rows: readonly QueueRow[], roomNumber: number): QueueRow[] =>
  rows
    .filter(({ call, item }) => call.room.number === roomNumber && isHere(item))
    .sort((a, b) => a.call.calledAt.localeCompare(b.call.calledAt) || a.call.id.localeCompare(b.call.id))

/** What is taken up after an item: what is still to verify, first after it and then from the beginning. */
export function nextAfter(queue: readonly QueueRow[], itemId: string): QueueRow | null {
  const at = queue.findIndex(({ item }) => item.id === itemId)
  const inTurn = [...queue.slice(at + 1), ...queue.slice(0, Math.max(at, 0))]
  return inTurn.find(({ item }) => item.stage === 'inRoom') ?? null
}
