import type { CallView, ItemView } from '@bellpull/contracts'
import {
  CATEGORY_RULES,
  callCommandPermission,
  commandsFor,
  type ItemCommandName,
  type Role,
} from '@bellpull/domain'
import { stateOf } from '@/composables/item'

/** Who looks at the board. */
export interface Viewer {
  readonly id: string
  readonly role: Role
}

/** What a button of the board does: a command, or `facts`: show what is there when nothing is free. */
export type ActionName = ItemCommandName | 'readBack' | 'confirm' | 'cancelCall' | 'facts'

/** Why nothing is left for this person to do just now. */
export type WaitingFor = 'accept' | 'fetch' | 'readBack' | 'check' | 'opening' | 'outcome' | 'shelving'

export type Next =
  | { readonly action: ActionName; readonly waitingFor: null }
  | { readonly action: null; readonly waitingFor: WaitingFor }

/** Whether this person may say the call back now: it waits for it, and somebody else called it. */
export const mayReadBack = (call: CallView, viewer: Viewer): boolean =>
  call.readBack === null &&
  call.calledBy.id !== viewer.id &&
  callCommandPermission('readBack', viewer.role).ok &&
  call.items.some((item) => item.outcome === null)

/**
 * Commands that make sense here for this person: the lifecycle's, less those that their own standing rules out
 * (only the holder gives back, only another takes over, what waits for its read-back is not verified).
 */
export function commandsHere(call: CallView, item: ItemView, viewer: Viewer): ItemCommandName[] {
  const mine = item.acceptedBy?.id === viewer.id
  const sensible: Partial<Record<ItemCommandName, boolean>> = {
    accept: item.hold !== 'noneFree',
    pull: item.hold !== 'noneFree',
    decline: mine,
    takeOver: item.acceptedBy !== null && !mine,
    verify: call.readBack !== null,
    // Taking back is for one's own last step, which the item does not tell.
    undo: false,
  }
  return commandsFor(stateOf(item), viewer.role).filter((name) => sensible[name] ?? true)
}

const DO = (action: ActionName): Next => ({ action, waitingFor: null })
const WAIT = (waitingFor: WaitingFor): Next => ({ action: null, waitingFor })

/**
 * The one next thing to do for an item, for the person who looks: what its button says. Where nothing is left
 * for them, what it waits for.
 */
export function nextAction(call: CallView, item: ItemView, viewer: Viewer): Next {
  const can = commandsHere(call, item, viewer)
  if (item.outcome !== null) return can.includes('shelve') ? DO('shelve') : WAIT('shelving')
  if (item.hold === 'noneFree' && item.stage === 'called') return DO('facts')

  const readBackFirst = mayReadBack(call, viewer)
  switch (item.stage) {
    case 'called':
      if (readBackFirst) return DO('readBack')
      return can.includes('accept') ? DO('accept') : WAIT('accept')
    case 'accepted':
    case 'pulled':
      if (readBackFirst) return DO('readBack')
      return bringing(item, viewer, can)
    case 'inRoom':
      if (CATEGORY_RULES[item.category].check === 'none')
        return can.includes('use') ? DO('use') : WAIT('outcome')
      if (readBackFirst) return DO('readBack')
      if (call.readBack === null) return WAIT('readBack')
      return can.includes('verify') ? DO('verify') : WAIT('check')
    case 'verified':
      return can.includes('open') ? DO('open') : WAIT('opening')
    case 'opened': {
      const end = can.find((name) => name === 'implant' || name === 'use')
      return end ? DO(end) : WAIT('outcome')
    }
  }
}

/**
 * Whose step it is on the way: the holder's own, else to take it over. What the core has pulled lies in the
 * hatch, and the next is whoever carries it.
 */
function bringing(item: ItemView, viewer: Viewer, can: readonly ItemCommandName[]): Next {
  const step = can.find((name) => name === 'pull' || name === 'deliver')
  if (!step) return WAIT('fetch')
  const fromHatch = item.stage === 'pulled' && item.acceptedBy?.role === 'core' && viewer.role !== 'core'
  if (!can.includes('takeOver') || fromHatch) return DO(step)
  return DO('takeOver')
}

/**
 * Everything else that this person may do for the item, in the order of the job: the row's menu.
 *
 * @param undoable whether the item's last step is this person's own and may still be taken back.
 */
export function menuFor(call: CallView, item: ItemView, viewer: Viewer, undoable: boolean): ActionName[] {
  const next = nextAction(call, item, viewer).action
  const open = call.items.filter((one) => one.outcome === null)
  const offered: ActionName[] = [
    ...(mayReadBack(call, viewer) ? (['readBack'] as const) : []),
    ...(mayConfirm(call, viewer) && item.outcome === null ? (['confirm'] as const) : []),
    ...commandsHere(call, item, viewer),
    ...(undoable ? (['undo'] as const) : []),
    ...(open.length > 1 && item.outcome === null && mayCancelAll(call, viewer)
      ? (['cancelCall'] as const)
      : []),
  ]
  return offered.filter((name) => name !== next)
}

/** Early and stand by become confirmed once they have been read back. */
export const mayConfirm = (call: CallView, viewer: Viewer): boolean =>
  call.kind !== 'confirmed' && call.readBack !== null && callCommandPermission('confirm', viewer.role).ok

const mayCancelAll = (call: CallView, viewer: Viewer): boolean =>
  callCommandPermission('cancel', viewer.role).ok && call.items.every((item) => item.stage !== 'opened')

/** How loud a button is: `ring` somebody waits for it, `go` the next step of the one who has it, the rest quieter. */
export type Tone = 'ring' | 'go' | 'line' | 'plain'

export const toneOf = (action: ActionName): Tone => {
  if (action === 'accept' || action === 'readBack') return 'ring'
  if (action === 'facts' || action === 'shelve') return 'line'
  return action === 'takeOver' ? 'plain' : 'go'
}
