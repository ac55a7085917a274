import type { CallView, ItemView, NOT_IMPLANTED_REASONS } from '@bellpull/contracts'
import { commandsFor, type ItemCommandName } from '@bellpull/domain'
import type { ComputedRef } from 'vue'
import type { ItemRow } from '@/components/calls/room/case-rows'
import { stateOf } from '@/composables/item'
import { useCommand, type CallCommand, type ItemCommand } from '@/composables/useCommand'
import { useClockStore } from '@/stores/clock'
import { useOwnStepsStore } from '@/stores/own-steps'
import { useSessionStore } from '@/stores/session'

/** Commands on what was called for the case, and taking the last of them back. */
export function useRoomCommands(calls: ComputedRef<readonly CallView[]>) {
  const command = useCommand()
  const session = useSessionStore()
  const clock = useClockStore()
  const steps = useOwnStepsStore()

  function note(answer: CallView, itemIds: readonly string[]): void {
    if (session.user !== null) steps.note(answer, itemIds, session.user.id, clock.nowMs)
  }
  const idsOf = (items: readonly ItemView[]): string[] => items.map(({ id }) => id)

  async function onCall(call: CallView, body: CallCommand): Promise<void> {
    const given = await command.onCall(call, body)
    if (given.ok && body.name === 'cancel') note(given.value, idsOf(given.value.items))
  }

  /** One after the other; stops at the first refusal, which stands beside its item. */
  async function onItems(itemIds: readonly string[], body: ItemCommand): Promise<void> {
    for (const id of itemIds) {
      const item = calls.value.flatMap(({ items }) => items).find((one) => one.id === id)
      if (item === undefined) continue
      const given = await command.onItem(item, body)
      if (!given.ok) return
      if (body.name === 'undo') steps.forget(id)
      else note(given.value, [id])
    }
  }

  function onRow(row: ItemRow, name: ItemCommandName, reason?: (typeof NOT_IMPLANTED_REASONS)[number]): void {
    const ids = idsOf(row.items)
    if (name === 'notImplanted') {
      if (reason !== undefined) void onItems(ids, { name, reason })
    } else if (
      name === 'implant' ||
      name === 'use' ||
      name === 'putBack' ||
      name === 'cancel' ||
      name === 'undo'
    )
      void onItems(ids, { name })
  }

  /** This person's own last step on all of them, no longer ago than may be taken back, and nothing after it. */
  const isUndoable = (of: { readonly items: readonly ItemView[] }): boolean =>
    of.items.every(
      (item) =>
        session.user !== null &&
        steps.mayUndo(item, session.user.id, clock.nowMs) &&
        commandsFor(stateOf(item), session.user.role).includes('undo'),
    )

  return { ...command, onCall, onItems, onRow, isUndoable, idsOf }
}
