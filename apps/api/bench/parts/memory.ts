import type { Child } from '../child.js'
import { GOALS, type Reached } from '../goals.js'
import { memoryOf, openProduct, type House } from '../houses.js'
import type { Listen } from '../listeners.js'

/** What a listener costs in the product's process, its garbage collected before and after. */
export async function measureMemory(listeners: Child, like: House, count: number): Promise<Reached> {
  const house = await openProduct('memory', like.url, like.stock, true)
  try {
    const listen = (name: string, many: number): Promise<void> => {
      const wish: Listen = {
        name,
        speaks: 'socket.io',
        port: house.port,
        tokens: house.tokens(),
        count: many,
      }
      return listeners.ask('listen', wish)
    }
    // The first ones pay for code that is loaded and compiled once.
    await listen('memory first', 100)
    const before = await memoryOf(house)
    await listen('memory rest', count)
    const after = await memoryOf(house)
    for (const name of ['memory first', 'memory rest']) await listeners.ask('leave', name)
    const kB = (value: (usage: NodeJS.MemoryUsage) => number): number =>
      (value(after) - value(before)) / count / 1000
    return {
      goal: GOALS.memory,
      value: kB((usage) => usage.rss),
      note: `${count} listeners; on the heap ${kB((usage) => usage.heapUsed + usage.external).toFixed(1)} kB`,
    }
  } finally {
    await house.close()
  }
}
