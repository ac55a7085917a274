import { Problem } from '../../../platform/http/problem.js'
import { lockUnit } from '../rows.js'
import { getPlace } from './places.js'
import { demandHold, demandStep, unitFacts, type ItemJob } from './step.js'

/** Somebody says: I bring it. */
export async function acceptItem({ work, actor, call, item }: ItemJob<unknown>): Promise<void> {
  demandStep(item, 'accept', actor)
  demandHold(item)
  await work.updateItem(item, {
    stage: 'accepted',
    acceptedBy: actor.id,
    acceptedAt: work.now,
    lastStep: work.stepBefore('accept', item, null),
  })
  work.event(call, item.id, 'item.accepted')
}

/** Who had accepted gives it back to everybody. */
export async function declineItem({
  work,
  actor,
  call,
  item,
}: ItemJob<{ reason?: string | undefined }>): Promise<void> {
  demandStep(item, 'decline', actor)
  if (item.acceptedBy !== actor.id)
    throw new Problem('not-permitted', { detail: 'Only who accepted it can give it back.' })
  await work.updateItem(item, { stage: 'called', acceptedBy: null, acceptedAt: null, lastStep: null })
  work.event(call, item.id, 'item.declined')
}

/** Another's errand becomes mine; the other is told. */
export async function takeOverItem({ work, actor, call, item }: ItemJob<unknown>): Promise<void> {
  demandStep(item, 'takeOver', actor)
  if (item.acceptedBy === actor.id) throw new Problem('item-moved-on', { detail: 'It is yours already.' })
  await work.updateItem(item, { acceptedBy: actor.id, lastStep: null })
  work.event(call, item.id, 'item.takenOver', { fromPersonId: item.acceptedBy })
  work.notice({
    kind: 'item.takenOver',
    personId: item.acceptedBy,
    byInitials: actor.initials,
    itemId: item.id,
    callId: call.id,
    roomId: call.roomId,
  })
}

/** Into the room. What was called in words has no package and comes straight from accepted. */
export async function deliverItem({ work, actor, call, item }: ItemJob<unknown>): Promise<void> {
  demandStep(item, 'deliver', actor)
  const unit = item.unitId === null ? null : await lockUnit(work.sql, item.unitId)
  const accepted = item.stage === 'called' ? ({ acceptedBy: actor.id, acceptedAt: work.now } as const) : {}
  await work.updateItem(item, {
    ...accepted,
    stage: 'inRoom',
    inRoomAt: work.now,
    lastStep: work.stepBefore('deliver', item, unit),
  })
  if (unit) {
    const place = await getPlace(work.sql, { roomId: call.roomId })
    await work.updateUnit(
      unit,
      { state: 'inRoom', heldFor: item.id, locationId: place },
      'delivered',
      item.id,
    )
  }
  work.event(call, item.id, 'item.delivered', unitFacts(unit))
}
