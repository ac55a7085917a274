import type { CALL_COMMAND_BODIES, ITEM_COMMAND_BODIES, SecondCheck } from '@bellpull/contracts'
import { CATEGORY_RULES, VERIFIED_FOR_MS } from '@bellpull/domain'
import type { z } from 'zod'
import { Problem } from '../../../platform/http/problem.js'
import type { CallWork } from '../call-work.js'
import { lockUnit, type CallRow, type ItemRow, type UnitRow } from '../rows.js'
import type { CallJob } from './call-level.js'
import {
  demandCalledProduct,
  demandDated,
  demandIdentified,
  demandUsable,
  hasLabel,
  isOf,
  readLabel,
  type LabelInput,
  type ReadLabel,
} from './label-input.js'
import { demandSecondCheck } from './second-check.js'
import { demandStep, needsUnit, unitFacts, type ItemJob } from './step.js'

interface Checks {
  readonly intact?: boolean | undefined
  readonly secondCheck?: SecondCheck | undefined
}

/** Was the PIN right? Asked before the transaction; `null` when no PIN was given. */
export interface PinAnswer {
  readonly pinIsRight: boolean | null
}

type One = ItemJob<z.infer<(typeof ITEM_COMMAND_BODIES)['verify']> & PinAnswer>
type Several = CallJob<z.infer<(typeof CALL_COMMAND_BODIES)['verify']> & PinAnswer>

export const verifyItem = ({ work, actor, call, item, body }: One): Promise<void> =>
  verify({ work, actor, call, items: [], body }, [{ item, input: body }], body)

/** Parts that go together, all or none. */
export async function verifyTogether(job: Several): Promise<void> {
  const pairs = job.body.items.map(({ itemId, ...input }) => {
    const item = job.items.find(({ id }) => id === itemId)
    if (!item) throw new Problem('not-found', { detail: 'One of these items is not of this call.' })
    return { item, input }
  })
  await verify(job, pairs, job.body)
}

async function verify(
  { work, actor, call }: Pick<Several, 'work' | 'actor' | 'call' | 'items'> & { body: unknown },
  pairs: readonly { item: ItemRow; input: LabelInput }[],
  checks: Checks & PinAnswer,
): Promise<void> {
  for (const { item } of pairs) demandStep(item, 'verify', actor)
  if (call.readBackBy === null) throw new Problem('not-read-back')

  const read: { item: ItemRow; unit: UnitRow | null; label: ReadLabel }[] = []
  for (const { item, input } of pairs) read.push({ item, ...(await compare(work, call, item, input)) })

  if (checks.intact !== true) throw new Problem('not-intact')
  const twoPeople = pairs
    .map(({ item }) => item)
    .filter((item) => CATEGORY_RULES[item.category].check === 'two-people')
  const second =
    twoPeople.length === 0
      ? null
      : await demandSecondCheck(work, {
          actor,
          caseId: call.caseId,
          caseSide: call.caseSide,
          items: twoPeople,
          check: checks.secondCheck,
          pinIsRight: checks.pinIsRight,
        })

  for (const { item, unit, label } of read) {
    const checked = twoPeople.includes(item) ? second : null
    await work.updateItem(item, {
      stage: 'verified',
      verifiedAt: work.now,
      checkedBy: checked?.checkerId ?? null,
      secondCheck: checked?.method ?? null,
      typed: item.typed || label.typed,
      lastStep: work.stepBefore('verify', item, unit),
    })
    work.event(call, item.id, 'item.verified', {
      ...unitFacts(unit),
      typed: label.typed,
      checkedBy: checked?.checkerId ?? null,
      method: checked?.method ?? null,
    })
  }
}

/** Label against call, and label against the package that was pulled. */
async function compare(
  work: CallWork,
  call: CallRow,
  item: ItemRow,
  input: LabelInput,
): Promise<{ unit: UnitRow | null; label: ReadLabel }> {
  const label = readLabel(input, work.today)
  await demandCalledProduct(work.sql, item, label, call.caseSide)
  demandDated(label)
  if (!needsUnit(item)) {
    if (label.useByOn! < work.today)
      throw new Problem('unit-expired', { detail: `Use by ${label.useByOn}; today is ${work.today}.` })
    return { unit: null, label }
  }
  demandIdentified(label)
  const unit = await lockUnit(work.sql, item.unitId!)
  if (!isOf(label, unit))
    throw new Problem('not-the-pulled-unit', {
      detail: `Pulled: lot ${unit.lot}. On this label: lot ${label.lot ?? 'not given'}.`,
      extra: {
        expected: { lot: unit.lot, serial: unit.serial },
        scanned: { lot: label.lot ?? null, serial: label.serial ?? null },
      },
    })
  demandUsable(unit, label, call.caseSide, work.today)
  return { unit, label }
}

/** Opens what was verified; long after that only with the label scanned again. */
export async function openItem({
  work,
  actor,
  call,
  item,
  body,
}: ItemJob<z.infer<(typeof ITEM_COMMAND_BODIES)['open']>>): Promise<void> {
  demandStep(item, 'open', actor)
  const old = work.now.getTime() - (item.verifiedAt?.getTime() ?? 0) > VERIFIED_FOR_MS
  if (old && !hasLabel(body)) throw new Problem('verify-again')
  let unit: UnitRow | null = null
  if (hasLabel(body)) unit = (await compare(work, call, item, body)).unit
  else if (item.unitId !== null) {
    unit = await lockUnit(work.sql, item.unitId)
    demandUsable(unit, null, call.caseSide, work.today)
  }
  await work.updateItem(item, { stage: 'opened', openedAt: work.now, lastStep: null })
  if (unit) await work.updateUnit(unit, { state: 'opened', heldFor: item.id }, 'opened', item.id)
  work.event(call, item.id, 'item.opened', { ...unitFacts(unit), scannedAgain: hasLabel(body) })
}
