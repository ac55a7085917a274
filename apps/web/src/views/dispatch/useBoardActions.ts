import type { CallView, ItemView } from '@bellpull/contracts'
import { UNDOABLE, VERIFIED_FOR_MS, type ItemCommandName } from '@bellpull/domain'
import { computed, ref, shallowRef } from 'vue'
import { useRouter } from 'vue-router'
import { nameOf } from '@/composables/item'
import { shortName } from '@/composables/names'
import { useCommand, useRefusals, type ItemCommand } from '@/composables/useCommand'
import { useText } from '@/composables/useText'
import { useBoardStore } from '@/stores/board'
import { useClockStore } from '@/stores/clock'
import type { Given } from '@/stores/commands'
import { useOwnStepsStore } from '@/stores/own-steps'
import type { ActionName, Viewer } from '@/components/calls/board/next-action'
import { QUESTIONS, type Question, type Said } from '@/components/calls/board/said'

const isQuestion = (action: ActionName): action is ActionName & Question =>
  (QUESTIONS as readonly string[]).includes(action)

const isUndoable = (name: string): boolean => (UNDOABLE as readonly string[]).includes(name)

/**
 * What the buttons of the board and of To fetch do: ask first, send, or lead to another screen; and what is
 * said of it afterwards.
 */
export function useBoardActions(viewer: () => Viewer) {
  const router = useRouter()
  const board = useBoardStore()
  const clock = useClockStore()
  const steps = useOwnStepsStore()
  const command = useCommand()
  const { wordsFor } = useRefusals()
  const { t } = useText()

  const said = ref<Said | null>(null)
  const asked = shallowRef<{ question: Question; callId: string; itemId: string } | null>(null)

  /** The open question with its call and item as they are now; gone when the item has left the board. */
  const asking = computed(() => {
    const call = asked.value && board.byId.get(asked.value.callId)
    const item = call?.items.find(({ id }) => id === asked.value?.itemId)
    return asked.value && call && item ? { question: asked.value.question, call, item } : null
  })

  function ask(question: Question, call: CallView, item: ItemView): void {
    asked.value = { question, callId: call.id, itemId: item.id }
  }
  const stopAsking = (): void => void (asked.value = null)

  /** What a button does; questions and other screens come first where they must. */
  async function act(action: ActionName, call: CallView, item: ItemView): Promise<void> {
    if (isQuestion(action)) return ask(action, call, item)
    switch (action) {
      case 'pull':
        if (item.unit) return void (await router.push({ name: 'fetch', query: { item: item.id } }))
        return send(call, item, { name: 'pull' })
      case 'verify':
        return void (await router.push({ name: 'verify', params: { itemId: item.id } }))
      case 'open':
        if (verifiedTooLongAgo(item)) return ask('openAgain', call, item)
        return send(call, item, { name: 'open' })
      case 'accept':
      case 'decline':
      case 'deliver':
      case 'implant':
      case 'use':
      case 'takeOver':
        return send(call, item, { name: action })
      case 'undo':
        return undo([item])
    }
  }

  const verifiedTooLongAgo = (item: ItemView): boolean =>
    item.verifiedAt !== null && clock.nowMs - Date.parse(item.verifiedAt) > VERIFIED_FOR_MS

  /** Sends a command on one item and says what came of it. @returns whether it was done. */
  async function give(item: ItemView, body: ItemCommand): Promise<Given<CallView>> {
    const given = await command.onItem(item, body)
    if (given.ok) {
      if (isUndoable(body.name)) steps.note(given.value, [item.id], viewer().id, clock.nowMs)
      else steps.forget(item.id)
    }
    return given
  }

  async function send(call: CallView, item: ItemView, body: ItemCommand): Promise<void> {
    const given = await give(item, body)
    if (!given.ok) return refuse(given.why, () => void send(call, item, body))
    stopAsking()
    const after = given.value.items.find(({ id }) => id === item.id) ?? item
    const undoable = isUndoable(body.name)
    said.value = {
      text: wordsOf(body.name, item),
      tone: 'done',
      again: undoable ? { what: 'undo', run: () => void undo([after]) } : null,
    }
  }

  function wordsOf(name: ItemCommandName, item: ItemView): string {
    const named = { item: nameOf(item), code: item.putBack?.toCode ?? '' }
    if (name === 'takeOver')
      return item.acceptedBy
        ? t('dispatch.done.takeOver', { ...named, name: shortName(item.acceptedBy.name) })
        : t('dispatch.done.takeOverNobody', named)
    if (name === 'shelve' && item.putBack?.inspect) return t('dispatch.done.inspected', named)
    return name in DONE ? t(`dispatch.done.${name as keyof typeof DONE}`, named) : ''
  }

  /** One walk, one tap: everything of the call that waits and has a package. */
  async function acceptTogether(call: CallView, items: readonly ItemView[]): Promise<void> {
    const given = await command.onCall(call, { name: 'accept' })
    if (!given.ok) return refuse(given.why, () => void acceptTogether(call, items))
    const ids = items.map(({ id }) => id)
    steps.note(given.value, ids, viewer().id, clock.nowMs)
    const after = given.value.items.filter(({ id }) => ids.includes(id))
    said.value = {
      text: t('dispatch.done.acceptAll', { n: after.length }),
      tone: 'done',
      again: { what: 'undo', run: () => void undo(after) },
    }
  }

  /** Commands on the whole call: it was said back, confirmed, cancelled. */
  async function sendOnCall(
    call: CallView,
    body: { name: 'readBack' } | { name: 'cancel' } | { name: 'confirm'; neededInMinutes?: number },
  ): Promise<void> {
    const given = await command.onCall(call, body)
    if (!given.ok) return refuse(given.why, () => void sendOnCall(call, body))
    stopAsking()
    const key = body.name === 'cancel' ? 'cancelCall' : body.name
    said.value = { text: t(`dispatch.done.${key}`), tone: 'done', again: null }
  }

  async function undo(items: readonly ItemView[]): Promise<void> {
    for (const item of items) {
      const given = await give(item, { name: 'undo' })
      if (!given.ok) return refuse(given.why, null)
    }
    said.value = { text: t('dispatch.done.undo'), tone: 'done', again: null }
  }

  function refuse(why: Parameters<typeof wordsFor>[0], again: (() => void) | null): void {
    const { text, notSent } = wordsFor(why)
    said.value = { text, tone: 'refused', again: notSent && again ? { what: 'send', run: again } : null }
  }

  const mayUndo = (item: ItemView): boolean => steps.mayUndo(item, viewer().id, clock.nowMs)
  /** A tap on the item or on its call is on its way. */
  const isBusy = (call: CallView, item: ItemView): boolean =>
    command.isBusy(item.id) || command.isBusy(call.id)

  return {
    said,
    asking,
    ask,
    stopAsking,
    act,
    give,
    send,
    sendOnCall,
    acceptTogether,
    undo,
    refuse,
    mayUndo,
    isBusy,
  }
}

/** Commands whose end is said in words. */
const DONE = {
  accept: true,
  decline: true,
  pull: true,
  deliver: true,
  open: true,
  implant: true,
  use: true,
  notImplanted: true,
  putBack: true,
  shelve: true,
  cancel: true,
} as const
