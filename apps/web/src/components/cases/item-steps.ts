import type { EventType, EventView } from '@bellpull/contracts'

/** Steps of an item that the case shows: who took them, and when. */
export const STEPS = ['accepted', 'pulled', 'inRoom', 'verified', 'opened', 'settled'] as const
export type StepName = (typeof STEPS)[number]

export interface Step {
  readonly step: StepName
  readonly who: string
  readonly at: string
  /** Of verified: the second person and how. */
  readonly second: { readonly personId: string; readonly how: 'spoken' | 'pin' | 'touch' } | null
}

const STEP_OF: Partial<Record<EventType, StepName>> = {
  'item.accepted': 'accepted',
  'item.taken': 'accepted',
  'item.takenOver': 'accepted',
  'item.pulled': 'pulled',
  'item.delivered': 'inRoom',
  'item.verified': 'verified',
  'item.opened': 'opened',
  'item.openedUnverified': 'opened',
  'item.implanted': 'settled',
  'item.used': 'settled',
  'item.notImplanted': 'settled',
  'item.returned': 'settled',
  'item.changed': 'settled',
  'item.cancelled': 'settled',
  'item.enteredInError': 'settled',
}

const UNDONE: Readonly<Record<string, StepName>> = {
  accept: 'accepted',
  pull: 'pulled',
  deliver: 'inRoom',
  verify: 'verified',
  implant: 'settled',
  use: 'settled',
  notImplanted: 'settled',
  cancel: 'settled',
}

/**
 * Who did what to an item and when, from the log in its order. What was taken back or given back is gone; a
 * rejected package begins anew.
 */
export function stepsOf(events: readonly EventView[], itemId: string): Step[] {
  const steps = new Map<StepName, Step>()
  for (const event of events) {
    if (event.itemId !== itemId) continue
    if (event.type === 'item.rejected') steps.clear()
    else if (event.type === 'item.declined') steps.delete('accepted')
    else if (event.type === 'item.undone') {
      const undone = UNDONE[String(event.data['command'])]
      if (undone) steps.delete(undone)
    } else {
      const step = STEP_OF[event.type as EventType]
      if (step) steps.set(step, { step, who: event.actor.name, at: event.at, second: secondOf(event) })
    }
  }
  return STEPS.flatMap((step) => steps.get(step) ?? [])
}

function secondOf({ type, data }: EventView): Step['second'] {
  const { checkedBy, method } = data
  if (type !== 'item.verified' || typeof checkedBy !== 'string') return null
  return method === 'spoken' || method === 'pin' || method === 'touch'
    ? { personId: checkedBy, how: method }
    : null
}
