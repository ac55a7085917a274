import type { CallView, ItemView } from '@bellpull/contracts'
import { computed, ref, shallowRef } from 'vue'
import { useRefusals, type Refusal } from '@/composables/useCommand'
import { useText } from '@/composables/useText'
import { useUnsentStore } from '@/stores/unsent'

/** Calls the same product again for the case, confirmed and for now, when its package may not be opened. */
export function useAnother(now: () => { call: CallView; item: ItemView }) {
  const unsent = useUnsentStore()
  const { wordsFor } = useRefusals()
  const { t } = useText()

  const open = ref(false)
  const refusal = shallowRef<Refusal | null>(null)
  const made = shallowRef<CallView | null>(null)
  const busy = computed(() => unsent.isBusy(now().call.caseId))

  /** What has come of it, in words; `null` before. */
  const words = computed(() => {
    const [one] = made.value?.items ?? []
    if (one === undefined) return null
    if (one.hold === 'noneFree') return t('verify.another.madeNone')
    if (one.unit === null) return t('verify.another.madeNotStocked')
    return t('verify.another.made', { lot: one.unit.lot, place: one.unit.location.code })
  })

  async function callAnother(calledBy: string): Promise<void> {
    const { call, item } = now()
    if (item.catalogueItemId === null) return
    refusal.value = null
    const given = await unsent.make(call.caseId, {
      kind: 'confirmed',
      neededInMinutes: 0,
      calledBy,
      side: call.side,
      items: [{ catalogueItemId: item.catalogueItemId, quantity: 1 }],
    })
    if (given.ok) {
      made.value = given.value
      open.value = false
    } else refusal.value = wordsFor(given.why)
  }

  const dismiss = (): void => void (refusal.value = null)

  return { open, refusal, made, busy, words, callAnother, dismiss }
}
