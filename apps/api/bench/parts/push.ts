import type { Child } from '../child.js'
import { compare, pushGoals, type Reached } from '../goals.js'
import type { House } from '../houses.js'
import type { Heard, Listen } from '../listeners.js'
import type { Acknowledged, Paced } from '../load.js'
import type { Options } from '../options.js'
import { inPairs, times } from './calls.js'

/** Mean time between two taps, in milliseconds: a busy house, and far from what either side can bear. */
const EVERY_MS = 25

export interface Pushed {
  readonly reached: Reached[]
  readonly wrong: number
  readonly words: string
}

/** From the tap to every listener's socket, with so many listeners. */
export async function measurePush(
  load: Child,
  listeners: Child,
  sides: { ours: House; theirs: House },
  count: number,
  { pairs, pushCalls }: Options,
): Promise<Pushed> {
  for (const { name, speaks, port, tokens } of [sides.ours, sides.theirs]) {
    const wish: Listen = { name: `${name} ${count}`, speaks, port, tokens: tokens(), count }
    await listeners.ask('listen', wish)
  }
  const half = async ({ name }: House): Promise<Heard> => {
    const wish: Paced = { aim: name, calls: pushCalls, everyMs: EVERY_MS }
    const calls = await load.ask<Acknowledged[]>('paced', wish)
    return await listeners.ask<Heard>('heard', { name: `${name} ${count}`, calls })
  }
  for (const house of [sides.ours, sides.theirs]) await half(house)
  const results = await inPairs(pairs, sides, half)
  for (const { name } of [sides.ours, sides.theirs]) await listeners.ask('leave', `${name} ${count}`)
  const sum = (value: (heard: Heard) => number): number =>
    results.reduce((all, { ours }) => all + value(ours), 0)
  const goals = pushGoals(count)
  return {
    reached: [
      compare(goals.p50, results, (heard) => heard.p50Ms, times),
      compare(goals.p99, results, (heard) => heard.p99Ms, times),
    ],
    wrong: sum((heard) => heard.lost + heard.doubled),
    words: `${results.length * pushCalls} events to ${count} listeners: ${sum((heard) => heard.lost)} lost, ${sum((heard) => heard.doubled)} doubled, ${sum((heard) => heard.outOfOrder)} out of order`,
  }
}
