import { defineStore } from 'pinia'
import { computed, ref } from 'vue'

const TICK_MS = 1_000
/** A tick that comes this late means that the device slept: what is on screen may be old. */
const SLEPT_MS = 15_000

/** The house's time, ticking once a second. All relative times on screen hang on this one clock. */
export const useClockStore = defineStore('clock', () => {
  const deviceMs = ref(Date.now())
  const offsetMs = ref(0)
  /** The house's time now, in milliseconds since the epoch. */
  const nowMs = computed(() => deviceMs.value + offsetMs.value)

  const sleepers = new Set<() => void>()
  let timer: ReturnType<typeof setInterval> | undefined
  let [least, most] = [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY]

  function tick(): void {
    const slept = Date.now() - deviceMs.value > SLEPT_MS
    deviceMs.value = Date.now()
    if (slept) for (const wake of sleepers) wake()
  }

  function start(): void {
    if (timer !== undefined) return
    timer = setInterval(tick, TICK_MS)
    document.addEventListener('visibilitychange', tick)
  }

  function stop(): void {
    clearInterval(timer)
    timer = undefined
    document.removeEventListener('visibilitychange', tick)
  }

  /**
   * Learns how far the device's clock is off from one answer of the house. Its `Date` header counts whole
   * seconds, so each answer gives a range; many answers narrow it down.
   */
  function learn(serverMs: number, sentMs: number, receivedMs: number): void {
    const range = [serverMs - receivedMs, serverMs + 1_000 - sentMs] as const
    least = Math.max(least, range[0])
    most = Math.min(most, range[1])
    // One of the clocks was set meanwhile: begin again.
    if (least > most) [least, most] = range
    offsetMs.value = Math.round((least + most) / 2)
  }

  /** Called after the device has slept. Returns the way to stop. */
  function onWake(wake: () => void): () => void {
    sleepers.add(wake)
    return () => sleepers.delete(wake)
  }

  return { nowMs, offsetMs, start, stop, learn, onWake }
})
