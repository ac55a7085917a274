import { UNDO_WITHIN_MS, whyUnusable } from '@bellpull/domain'
import { Problem } from '../../../platform/http/problem.js'
import { holdFree } from '../holds.js'
import { lockUnit, type ItemRow, type UnitRow } from '../rows.js'
import { demandStep, unitFacts, type ItemJob } from './step.js'

const INSTANTS = [
  'acceptedAt',
  'pulledAt',
  'inRoomAt',
  'verifiedAt',
  'openedAt',
  'settledAt',
  'putBackSince',
  'putBackDoneAt',
]

/**
 * Takes back one's own last step, within two minutes and while nothing has followed it: item and package
 * stand as before. The log keeps both the step and its undoing.
 */
export async function undoItem(job: ItemJob<unknown>): Promise<void> {
  const { work, actor, call, item } = job
  const step = item.lastStep
  if (step === null || step.by !== actor.id) throw new Problem('nothing-to-undo')
  if (work.now.getTime() - Date.parse(step.at) > UNDO_WITHIN_MS)
    throw new Problem('nothing-to-undo', { detail: 'It is more than two minutes ago.' })
  demandStep(item, 'undo', actor)
  if (item.outcome !== null && (call.caseStatus === 'closed' || call.caseStatus === 'cancelled'))
    throw new Problem('case-closed', { detail: 'Everything of this case had an outcome when it was closed.' })

  const before: Partial<ItemRow> = Object.fromEntries(
    Object.entries(step.item).map(([field, value]) => [
      field,
      INSTANTS.includes(field) && typeof value === 'string' ? new Date(value) : value,
    ]),
  )
  const unit = step.unit && (await lockUnit(work.sql, step.unit.id))
  if (unit && !isStill(item, unit, whyUnusable(unit, call.caseSide, work.today) === null)) {
    await holdAnother(job, before)
  } else {
    await work.updateItem(item, { ...before, lastStep: null })
    if (unit && step.unit)
      await work.updateUnit(
        unit,
        { state: step.unit.state, heldFor: item.id, locationId: step.unit.locationId },
        'undone',
        item.id,
      )
  }
  work.event(call, item.id, 'item.undone', { command: step.command, ...unitFacts(unit) })
}

/** Whether the package is where the step left it: this item's, settled by it, or let go and still free. */
function isStill(item: ItemRow, unit: UnitRow, usable: boolean): boolean {
  if (unit.heldFor !== null) return unit.heldFor === item.id
  if (item.outcome === 'cancelled')
    return (unit.state === 'available' && usable) || (unit.state === 'putBack' && item.putBackDoneAt === null)
  return unit.state === item.outcome
}

/** A cancelled hold went to somebody else meanwhile: the item stands again and holds another, or none. */
async function holdAnother({ work, call, item }: ItemJob<unknown>, before: Partial<ItemRow>): Promise<void> {
  if (item.outcome !== 'cancelled' || (before.stage !== 'called' && before.stage !== 'accepted'))
    throw new Problem('nothing-to-undo', { detail: 'Its package has gone elsewhere since.' })
  const unit = await holdFree(work, {
    itemId: item.id,
    catalogueItemId: item.catalogueItemId!,
    roomId: call.roomId,
    caseSide: call.caseSide,
    kind: call.kind,
    now: false,
  })
  const standing = unit
    ? { ...before, unitId: unit.id }
    : {
        ...before,
        unitId: null,
        hold: 'noneFree' as const,
        stage: 'called' as const,
        acceptedBy: null,
        acceptedAt: null,
      }
  await work.updateItem(item, { ...standing, lastStep: null })
}
