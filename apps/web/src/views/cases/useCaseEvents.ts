import type { EventView } from '@bellpull/contracts'
import { onScopeDispose, ref, shallowRef, toValue, watch, type MaybeRefOrGetter } from 'vue'
import { eventsApi } from '@/api/events'
import { ApiProblem, NotSent } from '@/api/problem'
import { useNotice } from '@/composables/useHouse'
import { useBoardStore } from '@/stores/board'

const PAGE = 200

/**
 * The log of a case, oldest first, read page by page to its end; what comes later is read from there on when
 * the house says that something of the case has changed.
 */
export function useCaseEvents(caseId: MaybeRefOrGetter<string>) {
  const board = useBoardStore()
  const events = shallowRef<readonly EventView[]>([])
  const phase = ref<'loading' | 'ready' | 'failed'>('loading')
  let cursor: string | undefined
  let running: Promise<void> | null = null
  let again = false
  let attempt = 0

  async function readOn(mine: number): Promise<void> {
    for (;;) {
      const page = await eventsApi.page({
        case: toValue(caseId),
        limit: PAGE,
        ...(cursor !== undefined && { after: cursor }),
      })
      if (mine !== attempt) return
      if (page.items.length > 0) events.value = [...events.value, ...page.items]
      if (page.nextCursor !== null) cursor = page.nextCursor
      if (page.items.length === 0 || page.nextCursor === null) return
    }
  }

  /** Reads what has happened since. While that runs, one more round is kept in mind. */
  async function refresh(): Promise<void> {
    if (running !== null) {
      again = true
      return await running
    }
    const mine = attempt
    running = readOn(mine)
      .then(
        () => {
          if (mine === attempt) phase.value = 'ready'
        },
        (error: unknown) => {
          if (!(error instanceof ApiProblem || error instanceof NotSent)) throw error
          if (mine === attempt && phase.value === 'loading') phase.value = 'failed'
        },
      )
      .finally(() => {
        running = null
      })
    await running
    if (again) {
      again = false
      await refresh()
    }
  }

  async function load(): Promise<void> {
    attempt += 1
    events.value = []
    cursor = undefined
    running = null
    phase.value = 'loading'
    await refresh()
  }

  onScopeDispose(
    board.onCall((call) => {
      if (call.caseId === toValue(caseId)) void refresh()
    }),
  )
  useNotice('case.changed', (message) => {
    if (message['caseId'] === toValue(caseId)) void refresh()
  })
  watch(() => board.loads, refresh)
  watch(() => toValue(caseId), load, { immediate: true })

  return { events, phase, load }
}
