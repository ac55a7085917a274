import type { Scan } from '@bellpull/contracts'
import { onScopeDispose, ref, toValue, type MaybeRefOrGetter } from 'vue'
import { useSessionStore } from '@/stores/session'
import { isHalfLabel, PAIR_WITHIN_MS, pairOf } from './scanPair'
import { LEAST_OF_LABEL, createWedge } from './wedge'

export interface WedgeOptions {
  /** Scans are heard only while this is true. */
  readonly enabled?: MaybeRefOrGetter<boolean>
  /** The code of a bin is awaited, which may have two characters only. */
  readonly bins?: MaybeRefOrGetter<boolean>
}

/** Fewest characters of a bin's code. */
const LEAST_OF_BIN = 2

/**
 * Hears a keyboard-wedge scanner anywhere on the page, except while somebody types into a field. A label with
 * two barcodes comes as a pair when the second follows soon; `half` holds the first one meanwhile.
 *
 * @param onScan gets what the scanner sent, unchanged, without its closing Enter.
 */
export function useWedgeScanner(
  onScan: (scan: Scan) => void,
  { enabled = true, bins = false }: WedgeOptions = {},
) {
  const session = useSessionStore()
  const wedge = createWedge(() => (toValue(bins) ? LEAST_OF_BIN : LEAST_OF_LABEL))
  const half = ref<string | null>(null)
  let timer: ReturnType<typeof setTimeout> | undefined

  const today = (): string => session.house.today || new Date().toISOString().slice(0, 10)

  /** A barcode, from the scanner or from a field. */
  function take(scan: string): void {
    const first = half.value
    settle()
    if (first !== null) {
      const pair = pairOf(first, scan, today())
      // Two labels one after the other: each goes alone.
      if (pair === null && first !== scan) onScan(first)
      if (pair !== null) return onScan(pair)
    }
    if (!isHalfLabel(scan, today())) return onScan(scan)
    half.value = scan
    timer = setTimeout(flush, PAIR_WITHIN_MS)
  }

  /** The second barcode is not coming: the first goes alone, and the house says what is missing. */
  function flush(): void {
    const first = half.value
    settle()
    if (first !== null) onScan(first)
  }

  function settle(): void {
    clearTimeout(timer)
    half.value = null
  }

  function down(event: KeyboardEvent): void {
    const field = fieldOf(event)
    const isTheirs = field !== null && field.dataset['scan'] === undefined
    if (!toValue(enabled) || event.isComposing || isTheirs) return wedge.reset()
    const read = wedge.press({
      key: event.key,
      ctrl: event.ctrlKey,
      alt: event.altKey,
      repeat: event.repeat,
      atMs: event.timeStamp,
    })
    if (!read.take) return
    // In the field for scans people type too, and fast: letters stay, separators and the closing Enter go.
    const isLetter = [...event.key].length === 1 && event.key >= ' ' && !event.ctrlKey && !event.altKey
    if (field !== null && (isLetter || (read.scan !== null && !sameLetters(read.scan, field.value)))) return
    // The closing Enter must not press the button that has the focus, nor the keys scroll the page.
    event.preventDefault()
    event.stopPropagation()
    if (read.scan === null) return
    if (field !== null) empty(field)
    take(read.scan)
  }

  function up(event: KeyboardEvent): void {
    if (event.key === 'Alt') wedge.releaseAlt()
  }

  addEventListener('keydown', down, { capture: true })
  addEventListener('keyup', up, { capture: true })
  onScopeDispose(() => {
    settle()
    removeEventListener('keydown', down, { capture: true })
    removeEventListener('keyup', up, { capture: true })
  })

  return { half, take, flush }
}

type Field = HTMLElement & { value: string }

/** The field into which somebody types: those keys are theirs, unless it is one for scans (`data-scan`). */
function fieldOf(event: KeyboardEvent): Field | null {
  const target = event.composedPath()[0]
  if (!(target instanceof HTMLElement)) return null
  const isField = target instanceof HTMLTextAreaElement || target instanceof HTMLSelectElement
  const types = target instanceof HTMLInputElement && !/^(button|checkbox|radio|submit)$/.test(target.type)
  return isField || types || target.isContentEditable ? (target as Field) : null
}

/** Separators leave no trace in a field. */
const sameLetters = (scan: string, typed: string): boolean => scan.replaceAll('\u001d', '') === typed.trim()

function empty(field: Field): void {
  field.value = ''
  field.dispatchEvent(new Event('input', { bubbles: true }))
}
