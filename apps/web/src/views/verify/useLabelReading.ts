import type { Scan } from '@bellpull/contracts'
import { ref, watch, type MaybeRefOrGetter } from 'vue'
import { labelsApi } from '@/api/labels'
import { ApiProblem, NotSent } from '@/api/problem'
import { joinBarcodes, type Reading } from '@/components/stock/fetch/two-barcodes'
import { useWedgeScanner } from '@/composables/useWedgeScanner'
import { useClockStore } from '@/stores/clock'
import { scannedLabel, type ReadingFault, type ReadLabel } from '@/components/calls/verify/label'

/**
 * Hears the scanner and has the house read what it sent. The first of two barcodes of one label is held until
 * the other one comes, or until somebody says that there is none.
 */
export function useLabelReading(
  onLabel: (label: ReadLabel) => void,
  enabled: MaybeRefOrGetter<boolean> = true,
) {
  const clock = useClockStore()
  const half = ref<{ first: string; label: ReadLabel | null } | null>(null)
  const fault = ref<ReadingFault | null>(null)
  const busy = ref(false)
  const wedge = useWedgeScanner((scan) => void take(scan), { enabled })
  let attempt = 0

  // Halves are held here for as long as it takes, so that each barcode comes on at once.
  watch(
    wedge.half,
    (held) => {
      if (held !== null) wedge.flush()
    },
    { flush: 'sync' },
  )

  async function read(scan: Scan): Promise<Reading> {
    try {
      return { ok: true, label: await labelsApi.parse(scan) }
    } catch (error) {
      if (!(error instanceof ApiProblem) || error.code !== 'label-unreadable') throw error
      return { ok: false, reason: String(error.members['reason'] ?? ''), detail: error.detail ?? '' }
    }
  }

  async function take(scan: Scan): Promise<void> {
    const mine = ++attempt
    busy.value = true
    fault.value = null
    try {
      const step =
        typeof scan === 'string'
          ? await joinBarcodes(scan, half.value?.first ?? null, read)
          : await joinBarcodes(scan[1], scan[0], read)
      if (mine !== attempt) return
      if (step.kind === 'label') {
        half.value = null
        onLabel(scannedLabel(step.scan, step.label, clock.nowMs))
      } else if (step.kind === 'half') {
        const alone = step.label && scannedLabel(step.first, step.label, clock.nowMs)
        half.value = { first: step.first, label: alone }
      } else if (step.kind === 'same') fault.value = { is: 'same' }
      else {
        half.value = null
        fault.value = { is: 'unreadable', detail: step.detail }
      }
    } catch (error) {
      if (mine !== attempt) return
      if (error instanceof NotSent) fault.value = { is: 'notSent' }
      else if (error instanceof ApiProblem) fault.value = { is: 'unreadable', detail: error.detail ?? '' }
      else throw error
    } finally {
      if (mine === attempt) busy.value = false
    }
  }

  /** The label has only this barcode: it goes on as it is. */
  function onlyThis(): void {
    const label = half.value?.label ?? null
    half.value = null
    if (label !== null) onLabel(label)
  }

  function startAgain(): void {
    attempt += 1
    busy.value = false
    half.value = null
    fault.value = null
  }

  return { half, fault, busy, onlyThis, startAgain }
}
