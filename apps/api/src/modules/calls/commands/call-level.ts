import type { CALL_COMMAND_BODIES } from '@bellpull/contracts'
import { transition } from '@bellpull/domain'
import type { z } from 'zod'
import { Problem } from '../../../platform/http/problem.js'
import type { Actor } from '../../../platform/http/session.js'
import type { CallWork } from '../call-work.js'
import { holdFor } from '../holds.js'
import type { CallRow, ItemRow } from '../rows.js'
import { cancelItem } from './cancel.js'
import { acceptItem } from './fetching.js'
import { stateOf } from './step.js'

type Body<N extends keyof typeof CALL_COMMAND_BODIES> = z.infer<(typeof CALL_COMMAND_BODIES)[N]>

/** What a command on a whole call works with. */
export interface CallJob<B> {
  readonly work: CallWork
  readonly actor: Actor
  readonly call: CallRow
  readonly items: readonly ItemRow[]
  readonly body: B
}

/** Part, variant, size and side were said back; who called may not be the one who says them back. */
export async function readBack({ work, actor, call, items }: CallJob<Body<'readBack'>>): Promise<void> {
  if (call.readBackBy !== null) throw new Problem('call-moved-on', { detail: 'It has been read back.' })
  if (items.every((item) => item.outcome !== null)) throw new Problem('call-moved-on')
  if (actor.id === call.calledBy) throw new Problem('own-call')
  work.updateCall(call, { read_back_by: actor.id, read_back_at: work.now })
  work.event(call, null, 'call.readBack')
}

/** Early or stand by becomes confirmed; items without a package try again and may take an early hold. */
export async function confirm({ work, call, items, body }: CallJob<Body<'confirm'>>): Promise<void> {
  if (call.kind === 'confirmed' || items.every((item) => item.outcome !== null))
    throw new Problem('call-moved-on', { detail: 'It is confirmed, or nothing is open.' })
  if (call.readBackBy === null) throw new Problem('not-read-back')
  if (call.kind === 'standby' && body.neededInMinutes === undefined)
    throw new Problem('invalid-input', {
      errors: [{ pointer: '/neededInMinutes', message: 'is needed when a stand-by call is confirmed' }],
    })
  const neededAt =
    body.neededInMinutes === undefined
      ? call.neededAt
      : new Date(work.now.getTime() + body.neededInMinutes * 60_000)
  work.updateCall(call, { kind: 'confirmed', confirmed_at: work.now, needed_at: neededAt })
  work.event(call, null, 'call.confirmed', { from: call.kind, neededAt: neededAt?.toISOString() ?? null })

  const confirmed: CallRow = { ...call, kind: 'confirmed', neededAt }
  const without = items
    .filter((item) => item.outcome === null && item.hold === 'noneFree' && item.catalogueItemId !== null)
    .sort((a, b) => a.catalogueItemId!.localeCompare(b.catalogueItemId!))
  for (const item of without) {
    const wish = {
      itemId: item.id,
      catalogueItemId: item.catalogueItemId!,
      roomId: call.roomId,
      caseSide: call.caseSide,
      kind: 'confirmed' as const,
      now: body.neededInMinutes === 0,
    }
    const unit = await holdFor(work, wish, confirmed)
    if (!unit) continue
    await work.updateItem(item, { hold: 'held', unitId: unit.id })
    work.event(call, item.id, 'item.heldAgain', { unitId: unit.id })
  }
}

/** Accepts whatever of the call waits to be accepted and has a package. */
export async function acceptCall(job: CallJob<Body<'accept'>>): Promise<void> {
  const { work, actor, call, items } = job
  const waiting = items.filter((item) => transition(stateOf(item), 'accept', actor.role).ok)
  const ready = waiting.filter((item) => item.hold !== 'noneFree')
  if (ready.length === 0)
    throw waiting.length > 0
      ? new Problem('none-free')
      : new Problem('call-moved-on', { detail: 'Nothing of this call waits to be accepted.' })
  for (const item of ready) await acceptItem({ work, actor, call, item, body: {} })
}

/** Cancels all that is open; nothing of the call may have been opened. */
export async function cancelCall(job: CallJob<Body<'cancel'>>): Promise<void> {
  const { work, actor, call, items, body } = job
  const open = items.filter((item) => item.outcome === null)
  if (open.length === 0) throw new Problem('call-moved-on')
  if (items.some((item) => item.stage === 'opened'))
    throw new Problem('call-moved-on', {
      detail: 'Something of this call has been opened: settle it item by item.',
    })
  for (const item of open) await cancelItem({ work, actor, call, item, body: { reason: body.reason } })
  work.event(call, null, 'call.cancelled', { reason: body.reason ?? null })
}
