import type { ITEM_COMMAND_BODIES } from '@bellpull/contracts'
import { whyUnusable } from '@bellpull/domain'
import type { z } from 'zod'
import { Problem } from '../../../platform/http/problem.js'
import { RoomsMoved } from '../call-work.js'
import { findUnitsByLabel, getItems, lockUnit, type ItemRow, type UnitRow } from '../rows.js'
import {
  demandCalledProduct,
  demandIdentified,
  demandUsable,
  isOf,
  readLabel,
  type ReadLabel,
} from './label-input.js'
import { getPlace } from './places.js'
import { demandHold, demandStep, needsUnit, unitFacts, type ItemJob } from './step.js'

type Job = ItemJob<z.infer<(typeof ITEM_COMMAND_BODIES)['pull']>>

/**
 * Out of the bin, by one scan; accepts as well when nobody has. Another package of the same product is taken
 * for the one held: free, the hold moves; held for somebody else on the shelf, the two holds are swapped.
 * A package that already stands in the room goes straight to *in room*.
 */
export async function pullItem({ work, actor, call, item, body }: Job): Promise<void> {
  demandStep(item, 'pull', actor)
  demandHold(item)
  const accepted = item.stage === 'called' ? ({ acceptedBy: actor.id, acceptedAt: work.now } as const) : {}

  if (!needsUnit(item)) {
    await work.updateItem(item, {
      ...accepted,
      stage: 'pulled',
      pulledAt: work.now,
      lastStep: work.stepBefore('pull', item, null),
    })
    work.event(call, item.id, 'item.pulled')
    return
  }

  const label = readLabel(body, work.today)
  await demandCalledProduct(work.sql, item, label, call.caseSide)
  demandIdentified(label)
  const held = await lockUnit(work.sql, item.unitId!)
  const unit = await findScanned(work, item, label, held, call.roomId)
  demandUsable(unit, label, call.caseSide, work.today)
  const lastStep = unit.id === held.id ? work.stepBefore('pull', item, held) : null
  if (unit.id !== held.id) await exchange({ work, actor, call, item, body }, held, unit)

  const inRoom = unit.placeRoomId === call.roomId
  await work.updateItem(item, {
    ...accepted,
    hold: 'held',
    unitId: unit.id,
    stage: inRoom ? 'inRoom' : 'pulled',
    pulledAt: work.now,
    inRoomAt: inRoom ? work.now : null,
    typed: label.typed,
    lastStep,
  })
  const place = inRoom ? unit.locationId : await getPlace(work.sql, { zone: 'hatch' })
  await work.updateUnit(
    unit,
    { state: inRoom ? 'inRoom' : 'pulled', heldFor: item.id, locationId: place },
    'pulled',
    item.id,
  )
  work.event(call, item.id, 'item.pulled', {
    ...unitFacts(unit),
    typed: label.typed,
    ...(unit.id !== held.id && { insteadOfUnitId: held.id }),
  })
  if (inRoom) work.event(call, item.id, 'item.delivered', unitFacts(unit))
}

/** Which package of the house was scanned: the held one when the label can be its, else a free one, else any. */
async function findScanned(
  work: Job['work'],
  item: ItemRow,
  label: ReadLabel,
  held: UnitRow,
  roomId: string,
): Promise<UnitRow> {
  if (isOf(label, held)) return held
  const inReach = (unit: UnitRow) => unit.placeRoomId === null || unit.placeRoomId === roomId
  const found = await findUnitsByLabel(work.sql, {
    catalogueItemId: item.catalogueItemId!,
    lot: label.lot,
    serial: label.serial,
    typed: label.typed,
  })
  // Packages of one lot look alike: what stands in another room is not the one that was scanned here.
  const candidates = [...found.filter(inReach), ...found.filter((unit) => !inReach(unit))]
  const usable = (unit: UnitRow) =>
    (unit.state === 'available' || unit.state === 'held') && unit.useByOn >= work.today && unit.sterile
  const best =
    candidates.find((unit) => unit.state === 'available' && usable(unit)) ??
    candidates.find((unit) => usable(unit)) ??
    candidates.find((unit) => unit.state === 'recalled' || unit.state === 'quarantined') ??
    candidates[0]
  if (!best)
    throw new Problem('unit-not-in-stock', { detail: 'The house has no package with this lot and serial.' })
  const unit = await lockUnit(work.sql, best.id)
  // Between looking and locking somebody else may have taken it.
  if (unit.state !== best.state || unit.heldFor !== best.heldFor) throw new RoomsMoved()
  if (!inReach(unit)) throw new Problem('unit-held-elsewhere', { detail: 'It stands in another room.' })
  return unit
}

/** The item lets go of `held` and takes `scanned`, which is free or on the shelf for another item. */
async function exchange({ work, call, item }: Job, held: UnitRow, scanned: UnitRow): Promise<void> {
  // Neither index allows two holds at once, so the item holds nothing for a moment.
  await work.updateItem(item, { hold: 'notStocked', unitId: null })
  if (scanned.heldFor === null) {
    if (scanned.state !== 'available')
      throw new Problem('unit-held-elsewhere', { detail: 'It is on its way already.' })
    await work.updateUnit(held, { state: 'available', heldFor: null }, 'another was pulled', item.id)
    return
  }
  if (scanned.state !== 'held')
    throw new Problem('unit-held-elsewhere', { detail: 'It has left the shelf for another room.' })

  const rival = (await getItems(work.sql, { itemId: scanned.heldFor }))[0]
  if (!rival) throw new RoomsMoved()
  const other = rival.callId === call.id ? call : (await work.load(rival.callId)).call
  const mayStandIn = held.placeRoomId === null || held.placeRoomId === other.roomId
  if (!mayStandIn || whyUnusable(held, other.caseSide, work.today) !== null)
    throw new Problem('unit-held-elsewhere', { detail: 'The package held here cannot stand in for it.' })
  await work.updateUnit(scanned, { state: 'available', heldFor: null }, 'swapped', rival.id)
  await work.updateUnit(held, { state: 'held', heldFor: rival.id }, 'swapped', rival.id)
  await work.updateItem(rival, { unitId: held.id, lastStep: null })
  work.event(other, rival.id, 'item.heldAgain', { ...unitFacts(held), insteadOfUnitId: scanned.id })
}
