import { createPinia, setActivePinia } from 'pinia'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { useClockStore } from './clock'

const NOW = Date.parse('2032-05-12T10:52:00Z')

beforeEach(() => {
  setActivePinia(createPinia())
  vi.useFakeTimers({ now: NOW })
})
afterEach(() => {
  useClockStore().stop()
  vi.useRealTimers()
})

describe("the house's time", () => {
  test('is the device’s until the house has answered', () => {
    expect(useClockStore().nowMs).toBe(NOW)
  })

  test('is learnt from whole seconds, the better the more answers there were', () => {
    const clock = useClockStore()
    const trueOffsetMs = 90_370
    /** An answer that took `roundTripMs`; the house wrote its whole second half-way. */
    const answer = (sentMs: number, roundTripMs: number) => {
      const houseMs = sentMs + roundTripMs / 2 + trueOffsetMs
      clock.learn(Math.floor(houseMs / 1_000) * 1_000, sentMs, sentMs + roundTripMs)
    }
    answer(NOW, 40)
    expect(Math.abs(clock.offsetMs - trueOffsetMs)).toBeLessThanOrEqual(520)
    for (const afterMs of [230, 610, 1_480, 2_640, 3_130, 4_890]) answer(NOW + afterMs, 40)
    expect(Math.abs(clock.offsetMs - trueOffsetMs)).toBeLessThanOrEqual(100)
  })

  test('follows when a clock is set', () => {
    const clock = useClockStore()
    clock.learn(NOW, NOW, NOW + 20)
    clock.learn(NOW + 3_600_000, NOW, NOW + 20)
    expect(clock.offsetMs).toBeGreaterThan(3_599_000)
  })

  test('ticks once a second', () => {
    const clock = useClockStore()
    clock.start()
    vi.advanceTimersByTime(3_000)
    expect(clock.nowMs).toBe(NOW + 3_000)
  })
})

test('a device that slept is noticed, one that ticks is not', () => {
  const clock = useClockStore()
  clock.start()
  const woken = vi.fn()
  const stop = clock.onWake(woken)
  vi.advanceTimersByTime(60_000)
  expect(woken).not.toHaveBeenCalled()
  vi.setSystemTime(Date.now() + 3_600_000)
  vi.advanceTimersByTime(1_000)
  expect(woken).toHaveBeenCalledTimes(1)
  stop()
  vi.setSystemTime(Date.now() + 3_600_000)
  vi.advanceTimersByTime(1_000)
  expect(woken).toHaveBeenCalledTimes(1)
})
