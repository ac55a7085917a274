import type { CallView } from '@bellpull/contracts'
import { computed, onScopeDispose, ref, shallowReactive, toValue, watch, type MaybeRefOrGetter } from 'vue'
import { casesApi } from '@/api/cases'
import { useBoardStore } from '@/stores/board'

/**
 * Every call of one case, finished ones too, kept right by the board's deltas and read again after each of its
 * snapshots. The newest call comes first.
 *
 * @param caseId `null` while the case is not known.
 */
export function useCaseCalls(caseId: MaybeRefOrGetter<string | null>) {
  const board = useBoardStore()
  const byId = shallowReactive(new Map<string, CallView>())
  const phase = ref<'empty' | 'loading' | 'ready' | 'failed'>('empty')
  const calls = computed(() => [...byId.values()].sort((a, b) => b.calledAt.localeCompare(a.calledAt)))
  let attempt = 0

  /** States of one room follow each other by revision, whichever way they come. */
  function put(call: CallView): void {
    const known = byId.get(call.id)
    if (known === undefined || known.revision <= call.revision) byId.set(call.id, call)
  }

  async function load(): Promise<void> {
    const id = toValue(caseId)
    const mine = ++attempt
    if (id === null) {
      byId.clear()
      phase.value = 'empty'
      return
    }
    if (phase.value !== 'ready') phase.value = 'loading'
    try {
      const found = await casesApi.calls(id)
      if (mine !== attempt) return
      for (const call of found) put(call)
      phase.value = 'ready'
    } catch {
      if (mine === attempt && phase.value === 'loading') phase.value = 'failed'
    }
  }

  onScopeDispose(
    board.onCall((call) => {
      if (call.caseId === toValue(caseId)) put(call)
    }),
  )
  watch(
    () => toValue(caseId),
    () => {
      byId.clear()
      phase.value = 'empty'
      void load()
    },
    { immediate: true },
  )
  watch(() => board.loads, load)

  return { calls, byId, phase, load }
}
