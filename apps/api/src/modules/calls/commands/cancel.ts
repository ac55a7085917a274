import { letGo } from '../holds.js'
import { lockUnit, type ItemRow, type UnitRow } from '../rows.js'
import type { CallWork } from '../call-work.js'
import { demandStep, unitFacts, type ItemJob } from './step.js'

/**
 * Cancels one item before it is opened. On the shelf the hold is let go; a package that has left its bin
 * becomes a put-back.
 */
export async function cancelItem({
  work,
  actor,
  call,
  item,
  body,
}: ItemJob<{ reason?: string | undefined }>): Promise<void> {
  demandStep(item, 'cancel', actor)
  const unit = item.unitId === null ? null : await lockUnit(work.sql, item.unitId)
  const lastStep = work.stepBefore('cancel', item, unit)
  const settled = {
    outcome: 'cancelled',
    settledAt: work.now,
    reason: body.reason ?? null,
    lastStep,
  } as const
  if (unit && isOnShelf(item)) {
    await work.updateItem(item, { ...settled, unitId: null })
    await letGo(work, unit, 'cancelled', item.id)
  } else {
    await work.updateItem(item, { ...settled, ...(unit ? putBackTask(work, unit, false) : {}) })
    if (unit) await startPutBack(work, unit, item.id)
  }
  work.event(call, item.id, 'item.cancelled', { reason: body.reason ?? null, ...unitFacts(unit) })
}

export const isOnShelf = (item: ItemRow): boolean => item.stage === 'called' || item.stage === 'accepted'

/** The task that brings a package back to its own bin, as columns of the item. */
export const putBackTask = (work: CallWork, unit: UnitRow, inspect: boolean) => ({
  putBackTo: unit.homeLocationId,
  putBackSince: work.now,
  putBackInspect: inspect,
  putBackDoneAt: null,
})

/** From here on the package is nobody's, and on its way. */
export async function startPutBack(work: CallWork, unit: UnitRow, itemId: string): Promise<void> {
  await work.updateUnit(unit, { state: 'putBack', heldFor: null }, 'put back', itemId)
}
