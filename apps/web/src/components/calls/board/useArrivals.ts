import { onBeforeUnmount, ref, shallowRef, watch } from 'vue'
import type { BoardRow } from './rows'

/** How long the bar says so, in milliseconds. */
const SAID_FOR_MS = 20_000

/**
 * Rows that came after the board was first shown: said once to screen readers, and offered in a bar while they
 * stand outside of what is on screen.
 *
 * @param rows the rows that are shown; `ready` once the board has been loaded.
 * @param isOnScreen whether a row can be seen just now.
 * @param heard told of each new row, once.
 */
export function useArrivals(
  rows: () => readonly BoardRow[],
  ready: () => boolean,
  isOnScreen: (row: BoardRow) => boolean,
  heard: (row: BoardRow) => void,
) {
  const known = new Set<string>()
  let begun = false
  const unseen = shallowRef<readonly BoardRow[]>([])
  const latest = ref<BoardRow | null>(null)
  let timer: ReturnType<typeof setTimeout> | undefined

  watch(
    () => [ready(), rows()] as const,
    ([isReady, now]) => {
      if (!isReady) return
      const fresh = now.filter(({ item }) => !known.has(item.id))
      for (const { item } of now) known.add(item.id)
      const still = new Set(now.map(({ item }) => item.id))
      const old = unseen.value.filter(({ item }) => still.has(item.id))
      if (!begun) {
        begun = true
        return
      }
      for (const row of fresh) heard(row)
      const newest = fresh.at(-1)
      if (newest) latest.value = newest
      const hidden = fresh.filter((row) => !isOnScreen(row))
      if (hidden.length === 0 && old.length === unseen.value.length) return
      unseen.value = [...old, ...hidden]
      clearTimeout(timer)
      if (unseen.value.length > 0) timer = setTimeout(dismiss, SAID_FOR_MS)
    },
    { flush: 'post', immediate: true },
  )

  function dismiss(): void {
    clearTimeout(timer)
    unseen.value = []
  }

  /** Another choice of rooms is not news. */
  function startOver(): void {
    known.clear()
    begun = false
    dismiss()
  }

  onBeforeUnmount(() => clearTimeout(timer))
  return { unseen, latest, dismiss, startOver }
}
