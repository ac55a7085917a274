import { CATEGORY_RULES, transition, type ItemCommandName, type ItemState } from '@bellpull/domain'
import { Problem } from '../../../platform/http/problem.js'
import type { Actor } from '../../../platform/http/session.js'
import type { CallWork } from '../call-work.js'
import type { CallRow, ItemRow, UnitRow } from '../rows.js'

/** What a command on an item works with. */
export interface ItemJob<B> {
  readonly work: CallWork
  readonly actor: Actor
  readonly call: CallRow
  readonly item: ItemRow
  readonly body: B
}

export const stateOf = (item: ItemRow): ItemState => ({
  category: item.category,
  stage: item.stage,
  outcome: item.outcome,
  putBackPending: item.putBackTo !== null && item.putBackDoneAt === null,
})

/** @throws {Problem} when the lifecycle has no such step from here for this role. */
export function demandStep(item: ItemRow, command: ItemCommandName, actor: Actor): void {
  const step = transition(stateOf(item), command, actor.role)
  if (step.ok) return
  if (step.because === 'wrong-role') throw new Problem('not-permitted')
  if (step.because === 'not-built') throw new Problem('not-found')
  throw new Problem('item-moved-on', { detail: `It is ${standing(item)} now.` })
}

/** Where an item stands, in the words of the board. */
export const standing = (item: ItemRow): string => {
  const at = item.outcome ?? item.stage
  return WORDS[at] ?? at
}

const WORDS: Readonly<Record<string, string>> = {
  inRoom: 'in the room',
  notImplanted: 'opened, not implanted',
  returned: 'put back',
  enteredInError: 'entered in error',
}

/** @throws {Problem} `none-free` when no package is held where one has to be. */
export function demandHold(item: ItemRow): void {
  if (item.hold === 'noneFree')
    throw new Problem('none-free', {
      detail: 'No package is held for it: the room chooses from what is there.',
    })
}

export const needsUnit = (item: ItemRow): boolean =>
  CATEGORY_RULES[item.category].holdsUnit && item.hold !== 'notStocked'

/** Facts of a package that a line of the log should carry. */
export const unitFacts = (unit: UnitRow | null): Record<string, unknown> =>
  unit ? { unitId: unit.id, lot: unit.lot, serial: unit.serial, useByOn: unit.useByOn } : {}
