import type { RailView } from '@bellpull/contracts'
import { onScopeDispose, ref, shallowRef, toValue, watch, type MaybeRefOrGetter } from 'vue'
import { casesApi } from '@/api/cases'
import { useBoardStore } from '@/stores/board'
import { useStockChanged } from './useHouse'

/** Changes of stock come in bursts; one read follows the last of them by this, in milliseconds. */
const SETTLE_MS = 250

/**
 * The rails of one case with their stock, read again whenever stock that concerns the case has moved. What is
 * known stays on screen meanwhile.
 *
 * @param caseId `null` while the case is not known.
 */
export function useCaseSizes(caseId: MaybeRefOrGetter<string | null>) {
  const board = useBoardStore()
  const rails = shallowRef<readonly RailView[]>([])
  const phase = ref<'empty' | 'loading' | 'ready' | 'failed'>('empty')
  let attempt = 0
  let timer: ReturnType<typeof setTimeout> | undefined

  async function load(): Promise<void> {
    clearTimeout(timer)
    const id = toValue(caseId)
    const mine = ++attempt
    if (id === null) return
    if (phase.value !== 'ready') phase.value = 'loading'
    try {
      const found = await casesApi.sizes(id)
      if (mine !== attempt) return
      rails.value = found
      phase.value = 'ready'
    } catch {
      if (mine === attempt && phase.value === 'loading') phase.value = 'failed'
    }
  }

  function loadSoon(): void {
    clearTimeout(timer)
    timer = setTimeout(() => void load(), SETTLE_MS)
  }

  useStockChanged(({ catalogueItemIds }) => {
    const changed = new Set(catalogueItemIds)
    if (rails.value.some((rail) => rail.sizes.some((size) => changed.has(size.catalogueItemId)))) loadSoon()
  })
  watch(
    () => toValue(caseId),
    () => {
      rails.value = []
      phase.value = 'empty'
      void load()
    },
    { immediate: true },
  )
  watch(() => board.loads, loadSoon)
  onScopeDispose(() => clearTimeout(timer))

  return { rails, phase, load }
}
