import type { ITEM_COMMAND_BODIES } from '@bellpull/contracts'
import type { UndoableCommand, UnitState } from '@bellpull/domain'
import type { z } from 'zod'
import { Problem } from '../../../platform/http/problem.js'
import { isStopped } from '../call-work.js'
import { tellWaitingRooms } from '../holds.js'
import { lockUnit } from '../rows.js'
import { putBackTask, startPutBack } from './cancel.js'
import { getPlace } from './places.js'
import { demandStep, unitFacts, type ItemJob } from './step.js'

type Body<N extends keyof typeof ITEM_COMMAND_BODIES> = z.infer<(typeof ITEM_COMMAND_BODIES)[N]>

/** The end of an opened item: what became of it, and of its package. */
async function settle(
  { work, actor, call, item }: ItemJob<unknown>,
  command: UndoableCommand & ('implant' | 'use' | 'notImplanted'),
  outcome: 'implanted' | 'used' | 'notImplanted',
  reason: string | null,
): Promise<void> {
  demandStep(item, command, actor)
  const unit = item.unitId === null ? null : await lockUnit(work.sql, item.unitId)
  await work.updateItem(item, {
    outcome,
    settledAt: work.now,
    reason,
    lastStep: work.stepBefore(command, item, unit),
  })
  const state: UnitState = outcome
  if (unit) await work.updateUnit(unit, { state, heldFor: null }, outcome, item.id)
  work.event(call, item.id, `item.${outcome}`, { ...unitFacts(unit), ...(reason !== null && { reason }) })
}

export const implantItem = (job: ItemJob<Body<'implant'>>): Promise<void> =>
  settle(job, 'implant', 'implanted', null)

export const useItem = (job: ItemJob<Body<'use'>>): Promise<void> => settle(job, 'use', 'used', null)

export const notImplantedItem = (job: ItemJob<Body<'notImplanted'>>): Promise<void> =>
  settle(job, 'notImplanted', 'notImplanted', [job.body.reason, job.body.note].filter(Boolean).join(': '))

/** Not needed after all: a task brings the package back to its bin, or to be looked at. */
export async function putBackItem({
  work,
  actor,
  call,
  item,
  body,
}: ItemJob<Body<'putBack'>>): Promise<void> {
  demandStep(item, 'putBack', actor)
  const unit = item.unitId === null ? null : await lockUnit(work.sql, item.unitId)
  const inspect = body.infected ?? false
  await work.updateItem(item, {
    outcome: 'returned',
    settledAt: work.now,
    reason: body.reason ?? null,
    lastStep: null,
    ...(unit ? putBackTask(work, unit, inspect) : {}),
  })
  if (unit) await startPutBack(work, unit, item.id)
  work.event(call, item.id, 'item.returned', { ...unitFacts(unit), reason: body.reason ?? null, inspect })
}

/** Back in its bin and free again, or set aside to be looked at. */
export async function shelveItem({ work, actor, call, item, body }: ItemJob<Body<'shelve'>>): Promise<void> {
  demandStep(item, 'shelve', actor)
  const unit = await lockUnit(work.sql, item.unitId!)
  const inspect = item.putBackInspect || (body.inspect ?? false) || isStopped(unit)
  const { rows } = await work.sql.query<{ code: string }>({
    name: 'place-code',
    text: 'SELECT code FROM location WHERE id = $1',
    values: [item.putBackTo],
  })
  const code = rows[0]!.code
  // What is to be looked at goes to its own place, whichever bin was scanned.
  if (!inspect && body.binCode !== undefined && body.binCode.toUpperCase() !== code.toUpperCase())
    throw new Problem('invalid-input', {
      detail: `This package belongs in ${code}.`,
      errors: [{ pointer: '/binCode', message: `is not ${code}, where this package belongs` }],
    })
  await work.updateItem(item, { putBackDoneAt: work.now, putBackInspect: inspect, lastStep: null })
  if (unit.state === 'putBack' || isStopped(unit)) {
    const to = inspect
      ? { state: 'quarantined' as const, locationId: await getPlace(work.sql, { zone: 'quarantine' }) }
      : { state: 'available' as const, locationId: item.putBackTo! }
    await work.updateUnit(unit, { ...to, heldFor: null }, inspect ? 'to inspection' : 'shelved', item.id)
    if (!inspect) await tellWaitingRooms(work, unit.catalogueItemId)
  }
  work.event(call, item.id, 'item.shelved', { ...unitFacts(unit), inspect, binCode: inspect ? null : code })
}
