import { afterEach, beforeEach, expect, it, vi } from 'vitest'
import { EVERY_MS, Gathered } from './gathered.js'

beforeEach(() => void vi.useFakeTimers())
afterEach(() => void vi.useRealTimers())

function listenTo(): { gathered: Gathered; told: string[] } {
  const told: string[] = []
  return { gathered: new Gathered((ids) => told.push(ids.join(' '))), told }
}

it('the first news is told at once, and what follows as one when it is time', () => {
  const { gathered, told } = listenTo()
  gathered.add(['a'])
  expect(told).toEqual(['a'])
  gathered.add(['b'])
  gathered.add(['c', 'b'])
  vi.advanceTimersByTime(EVERY_MS - 1)
  expect(told).toEqual(['a'])
  vi.advanceTimersByTime(1)
  expect(told).toEqual(['a', 'b c'])
  gathered.add(['d'])
  vi.advanceTimersByTime(EVERY_MS)
  expect(told).toEqual(['a', 'b c', 'd'])
})

it('after a time without any, news is told at once again', () => {
  const { gathered, told } = listenTo()
  gathered.add(['a'])
  vi.advanceTimersByTime(EVERY_MS)
  gathered.add(['b'])
  expect(told).toEqual(['a', 'b'])
})

it('no news is not told', () => {
  const { gathered, told } = listenTo()
  gathered.add([])
  vi.advanceTimersByTime(EVERY_MS)
  expect(told).toEqual([])
  expect(vi.getTimerCount()).toBe(0)
})

it('what was gathered is told when the house closes', () => {
  const { gathered, told } = listenTo()
  gathered.add(['a'])
  gathered.add(['b'])
  gathered.close()
  expect(told).toEqual(['a', 'b'])
  expect(vi.getTimerCount()).toBe(0)
})
