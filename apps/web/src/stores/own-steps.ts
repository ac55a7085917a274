import type { CallView, ItemView } from '@bellpull/contracts'
import { UNDO_WITHIN_MS } from '@bellpull/domain'
import { defineStore } from 'pinia'
import { shallowReactive } from 'vue'

interface OwnStep {
  readonly userId: string
  /** The item's version after the step: any later one means that something has followed it. */
  readonly version: number
  readonly atMs: number
}

/**
 * Steps that this person took on this screen and may still take back. An item does not tell who took its last
 * step; the house has the last word.
 */
export const useOwnStepsStore = defineStore('ownSteps', () => {
  const byItem = shallowReactive(new Map<string, OwnStep>())

  /** Keeps the steps that a command's answer shows, for these items. */
  function note(answer: CallView, itemIds: readonly string[], userId: string, nowMs: number): void {
    for (const item of answer.items)
      if (itemIds.includes(item.id)) byItem.set(item.id, { userId, version: item.version, atMs: nowMs })
  }

  const forget = (itemId: string): void => void byItem.delete(itemId)

  /** Whether the item stands as this person's own step left it, no longer ago than may be taken back. */
  function mayUndo(item: ItemView, userId: string, nowMs: number): boolean {
    const step = byItem.get(item.id)
    return (
      step !== undefined &&
      step.userId === userId &&
      step.version === item.version &&
      nowMs - step.atMs < UNDO_WITHIN_MS
    )
  }

  return { note, forget, mayUndo }
})
