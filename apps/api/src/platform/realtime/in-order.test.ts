import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { InOrder, WAITS_MS } from './in-order.js'

beforeEach(() => void vi.useFakeTimers())
afterEach(() => void vi.useRealTimers())

function listenTo(): { order: InOrder; told: string[]; add: (...names: string[]) => void } {
  const told: string[] = []
  const order = new InOrder(({ roomId, revision }) => told.push(`${roomId}${revision}`))
  const add = (...names: string[]): void => {
    for (const name of names)
      order.add({ roomId: name.slice(0, 1), revision: Number(name.slice(1)), event: 'call.called', call: {} })
  }
  return { order, told, add }
}

describe('the deltas of a room', () => {
  it.each([
    ['in order are told at once', ['a1', 'a2', 'a3'], ['a1', 'a2', 'a3']],
    ['begin anywhere', ['a41', 'a42'], ['a41', 'a42']],
    ['that overtook one another are put right', ['a1', 'a3', 'a2', 'a4'], ['a1', 'a2', 'a3', 'a4']],
    ['wait for the slowest of several', ['a1', 'a4', 'a3', 'a2'], ['a1', 'a2', 'a3', 'a4']],
    ['do not wait for another room', ['a1', 'b1', 'a3', 'b2', 'a2'], ['a1', 'b1', 'b2', 'a2', 'a3']],
    ['wait while one is missing', ['a1', 'a3', 'a4'], ['a1']],
    ['that are older than what was told are told at once', ['a7', 'a8', 'a3'], ['a7', 'a8', 'a3']],
  ])('%s', (_what, added, expected) => {
    const { told, add } = listenTo()
    add(...added)
    expect(told).toEqual(expected)
  })

  it('are told in order, with the gap, when the missing one does not come in time', () => {
    const { told, add } = listenTo()
    add('a1', 'a4', 'a3')
    vi.advanceTimersByTime(WAITS_MS - 1)
    expect(told).toEqual(['a1'])
    vi.advanceTimersByTime(1)
    expect(told).toEqual(['a1', 'a3', 'a4'])
    add('a5', 'a2')
    expect(told).toEqual(['a1', 'a3', 'a4', 'a5', 'a2'])
  })

  it('have their whole time to wait each time anew', () => {
    const { told, add } = listenTo()
    add('a1', 'a3')
    vi.advanceTimersByTime(WAITS_MS - 1)
    add('a2', 'a5')
    vi.advanceTimersByTime(WAITS_MS - 1)
    expect(told).toEqual(['a1', 'a2', 'a3'])
    vi.advanceTimersByTime(1)
    expect(told).toEqual(['a1', 'a2', 'a3', 'a5'])
  })

  it('that still wait are told when the house closes', () => {
    const { order, told, add } = listenTo()
    add('a1', 'a3', 'b9')
    order.close()
    expect(told).toEqual(['a1', 'b9', 'a3'])
    expect(vi.getTimerCount()).toBe(0)
  })
})
