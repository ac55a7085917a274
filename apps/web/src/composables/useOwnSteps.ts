import type { CallView, ItemView } from '@bellpull/contracts'
import { commandsFor, UNDO_WITHIN_MS, type Role } from '@bellpull/domain'
import { shallowReactive } from 'vue'
import { useClockStore } from '@/stores/clock'
import { stateOf } from './item'

/**
 * This person's own steps on this screen, so that the last of them can be taken back: within two minutes, and
 * only while nothing has followed it. The house decides; this only says when it is worth asking.
 */
export function useOwnSteps() {
  const clock = useClockStore()
  const steps = shallowReactive(new Map<string, { version: number; atMs: number }>())

  /** @param call as the house answered it. */
  function remember(call: CallView, itemIds: readonly string[]): void {
    for (const item of call.items)
      if (itemIds.includes(item.id)) steps.set(item.id, { version: item.version, atMs: clock.nowMs })
  }
  const forget = (itemId: string): void => void steps.delete(itemId)

  function isUndoable(item: ItemView, role: Role): boolean {
    const step = steps.get(item.id)
    if (step === undefined || step.version !== item.version) return false
    return clock.nowMs - step.atMs < UNDO_WITHIN_MS && commandsFor(stateOf(item), role).includes('undo')
  }

  return { remember, forget, isUndoable }
}
