import { lifecycleRows, transition, type ItemCommandName } from '@bellpull/domain'
import { putBackPending, type DemoItem } from './books.js'
import type { DemoPerson } from './people.js'

/** A rule that the story breaks: the demo must not show what the house would refuse. */
export class StoryFault extends Error {
  override readonly name = 'StoryFault'
}

/**
 * Holds a step of the story against the domain's table; what this release cannot do yet, against the same
 * row of that table.
 *
 * @throws {StoryFault} naming who cannot do what to what.
 */
export function demandStep(item: DemoItem, command: ItemCommandName, by: DemoPerson): void {
  const state = {
    category: item.category,
    stage: item.stage,
    outcome: item.outcome,
    putBackPending: putBackPending(item),
  }
  const answer = transition(state, command, by.role)
  if (answer.ok) return
  const row = lifecycleRows().find((one) => one.command === command)
  if (answer.because === 'not-built' && row?.from.includes(item.stage) && item.outcome === null) return
  throw new StoryFault(
    `${by.name} cannot ${command} ${item.product?.ref ?? item.text} of ${item.call.of.number}, ` +
      `${item.outcome ?? item.stage}: ${answer.because}`,
  )
}
