import { computed, type ComputedRef } from 'vue'
import { useClockStore } from '@/stores/clock'
import { useSessionStore } from '@/stores/session'
import { dayIn } from './times'

/** The house's day, `YYYY-MM-DD`, by the clock: a screen may stand open past midnight. */
export function useToday(): ComputedRef<string> {
  const clock = useClockStore()
  const session = useSessionStore()
  return computed(() => dayIn(clock.nowMs, session.house.zone))
}
