import type { CallView, CaseView, MakeCall } from '@bellpull/contracts'
import { computed, ref, watch, type ComputedRef, type Ref, type WritableComputedRef } from 'vue'
import { NotSent } from '@/api/problem'
import { bodyOf, type Draft } from '@/components/calls/room/draft'
import type { NotSentRow } from '@/components/calls/room/NotSentCalls.vue'
import { useRefusals } from '@/composables/useCommand'
import { useText } from '@/composables/useText'
import { useTimes } from '@/composables/useTimes'
import { useClockStore } from '@/stores/clock'
import { useUnsentStore } from '@/stores/unsent'

interface Room {
  readonly caseView: Ref<CaseView | null>
  /** The room's cases of today. */
  readonly cases: ComputedRef<readonly CaseView[]>
  readonly draft: WritableComputedRef<Draft | null>
  readonly clear: () => void
  /** "head 50 concentric", of a catalogue item. */
  readonly say: (catalogueItemId: string) => string
  /** A call has been made; its state as the house answered it. */
  readonly made: (call: CallView) => void
}

/**
 * Making the call that was put together, and what becomes of it: made, refused in plain words with nothing
 * lost, or not sent, which waits on screen until a person sends it again or drops it.
 */
export function useRoomCalling({ caseView, cases, draft, clear, say, made }: Room) {
  const unsent = useUnsentStore()
  const clock = useClockStore()
  const { wordsFor } = useRefusals()
  const { t } = useText()
  const { age } = useTimes()

  const refusal = ref<string | null>(null)
  watch([draft, () => caseView.value?.id], () => {
    refusal.value = null
  })

  async function call(): Promise<void> {
    if (caseView.value === null || draft.value === null) return
    const of = caseView.value
    const given = await unsent.make(of.id, bodyOf(draft.value, of))
    if (given.ok) {
      clear()
      made(given.value)
      return
    }
    // What was chosen now stands among what was not sent.
    if (given.why instanceof NotSent) clear()
    else {
      const { code, detail } = given.why
      refusal.value = code === 'not-called-here' && detail !== null ? detail : wordsFor(given.why).text
    }
  }

  const waiting = computed(() => cases.value.flatMap(({ id }) => unsent.ofCase(id)))
  const sendRefusal = ref<string | null>(null)
  const rows = computed<NotSentRow[]>(() =>
    waiting.value.map((one) => ({
      key: one.tap.key,
      said: sayCall(one.call),
      age: age(clock.nowMs - one.madeAtMs),
    })),
  )

  function sayCall(one: MakeCall): string {
    const what = one.items.map((line) => {
      if ('text' in line) return line.text
      const said = say(line.catalogueItemId)
      return line.quantity > 1 ? `${line.quantity} × ${said}` : said
    })
    const named = { side: t(`common.side.${one.side}`), what: what.join(', ') }
    return one.kind === 'standby' ? t('room.call.standBy', named) : t('room.call.call', named)
  }

  async function sendAgain(key: string): Promise<void> {
    const one = waiting.value.find(({ tap }) => tap.key === key)
    if (one === undefined) return
    sendRefusal.value = null
    const given = await unsent.sendAgain(one)
    if (given.ok) made(given.value)
    else sendRefusal.value = wordsFor(given.why).text
  }

  function drop(key: string): void {
    const one = waiting.value.find(({ tap }) => tap.key === key)
    if (one !== undefined) unsent.discard(one)
    sendRefusal.value = null
  }

  const busy = computed(() => caseView.value !== null && unsent.isBusy(caseView.value.id))

  return { call, refusal, busy, rows, sendRefusal, sendAgain, drop }
}
