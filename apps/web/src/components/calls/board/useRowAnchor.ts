import { onBeforeUnmount, onMounted, watch, type Ref } from 'vue'

/** How long after a touch its row is still held in place, in milliseconds. */
const TOUCH_HOLDS_MS = 2_500

/**
 * Holds the row under the pointer, finger or focus in place while rows come, go and move: the page scrolls by
 * as much as the row would have moved, with room lent above or below where there is nothing to scroll.
 *
 * @param list the element that holds the rows; each row bears `data-row`.
 * @param rows what the rows are made of: the hold is taken before a change of it is drawn, and applied after.
 */
export function useRowAnchor(list: Ref<HTMLElement | null>, rows: () => unknown) {
  /** Room lent above and below the list, in pixels. */
  const lent = { above: 0, below: 0 }
  let pointed: string | null = null
  let touchedAtMs = 0
  let isMouse = false
  let held: { key: string; top: number } | null = null

  const rowOf = (target: EventTarget | null): string | null =>
    target instanceof Element ? (target.closest<HTMLElement>('[data-row]')?.dataset['row'] ?? null) : null

  const elementOf = (key: string): HTMLElement | null =>
    list.value?.querySelector<HTMLElement>(`[data-row="${CSS.escape(key)}"]`) ?? null

  function point(event: PointerEvent): void {
    pointed = rowOf(event.target)
    touchedAtMs = performance.now()
    isMouse = event.pointerType === 'mouse'
    if (pointed === null) giveBack()
  }

  function leave(): void {
    pointed = null
    giveBack()
  }

  /** The row that must not move: where the pointer rests or a finger was just now, else where the focus is. */
  function anchorKey(): string | null {
    if (pointed !== null && (isMouse || performance.now() - touchedAtMs < TOUCH_HOLDS_MS)) return pointed
    const focus = document.activeElement
    return focus !== null && list.value?.contains(focus) ? rowOf(focus) : null
  }

  function lend(more: Partial<typeof lent>): void {
    Object.assign(lent, more)
    if (!list.value) return
    list.value.style.paddingTop = lent.above > 0 ? `${lent.above}px` : ''
    list.value.style.paddingBottom = lent.below > 0 ? `${lent.below}px` : ''
  }
  function giveBack(): void {
    if (lent.above > 0 || lent.below > 0) lend({ above: 0, below: 0 })
  }

  watch(
    rows,
    () => {
      const key = anchorKey()
      const element = key === null ? null : elementOf(key)
      held = key !== null && element ? { key, top: element.getBoundingClientRect().top } : null
      if (held === null) giveBack()
    },
    { flush: 'pre' },
  )

  watch(
    rows,
    () => {
      const element = held && elementOf(held.key)
      if (!element || !held) return
      const moved = element.getBoundingClientRect().top - held.top
      if (Math.abs(moved) < 1) return
      const page = document.documentElement
      if (moved > 0) {
        const left = page.scrollHeight - page.clientHeight - page.scrollTop
        if (left < moved) lend({ below: lent.below + moved - left })
        page.scrollTop += moved
      } else {
        const scrolled = Math.min(page.scrollTop, -moved)
        page.scrollTop -= scrolled
        if (scrolled < -moved) lend({ above: lent.above - moved - scrolled })
      }
    },
    { flush: 'post' },
  )

  onMounted(() => {
    list.value?.addEventListener('pointermove', point, { passive: true })
    list.value?.addEventListener('pointerdown', point, { passive: true })
    list.value?.addEventListener('pointerleave', leave, { passive: true })
  })
  onBeforeUnmount(() => {
    list.value?.removeEventListener('pointermove', point)
    list.value?.removeEventListener('pointerdown', point)
    list.value?.removeEventListener('pointerleave', leave)
  })
}
