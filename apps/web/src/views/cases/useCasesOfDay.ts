import type { CaseView } from '@bellpull/contracts'
import { computed, ref, shallowRef, toValue, watch, type MaybeRefOrGetter } from 'vue'
import { casesApi } from '@/api/cases'
import { ApiProblem, NotSent } from '@/api/problem'
import { dayIn } from '@/composables/times'
import { useCasesStore } from '@/stores/cases'
import { useSessionStore } from '@/stores/session'

/**
 * The cases of a day, by room and time. Today's are the live ones of the store; another day's are read once.
 *
 * @param day `YYYY-MM-DD`
 */
export function useCasesOfDay(day: MaybeRefOrGetter<string>) {
  const store = useCasesStore()
  const session = useSessionStore()
  const other = shallowRef<readonly CaseView[]>([])
  const otherPhase = ref<'loading' | 'ready' | 'failed'>('loading')
  let attempt = 0

  const isToday = computed(() => toValue(day) === session.house.today)
  const cases = computed(() => byRoomAndTime(isToday.value ? store.today.filter(isOfToday) : other.value))
  const phase = computed(() => {
    if (!isToday.value) return otherPhase.value
    return store.phase === 'empty' ? 'loading' : store.phase
  })

  /** The store keeps cases of other days as well, once they have been looked at. */
  const isOfToday = (one: CaseView): boolean =>
    dayIn(one.startsAt, session.house.zone) === session.house.today

  async function load(): Promise<void> {
    if (isToday.value) return await store.load()
    const mine = ++attempt
    otherPhase.value = 'loading'
    try {
      const found = await casesApi.list(toValue(day))
      if (mine !== attempt) return
      other.value = found
      otherPhase.value = 'ready'
    } catch (error) {
      if (!(error instanceof ApiProblem || error instanceof NotSent)) throw error
      if (mine === attempt) otherPhase.value = 'failed'
    }
  }

  watch(
    () => toValue(day),
    () => {
      if (!isToday.value) void load()
    },
    { immediate: true },
  )

  return { cases, phase, isToday, load }
}

/** By room, and by time within a room. */
export const byRoomAndTime = (cases: readonly CaseView[]): CaseView[] =>
  [...cases].sort((a, b) => a.room.number - b.room.number || a.startsAt.localeCompare(b.startsAt))
