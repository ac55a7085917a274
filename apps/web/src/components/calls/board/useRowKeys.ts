import { onBeforeUnmount, onMounted, type Ref } from 'vue'

/** Keys of the rows: j and k or the arrows walk, Enter acts (the row hears it itself), m opens the row's menu. */
export function useRowKeys(list: Ref<HTMLElement | null>): void {
  const rows = (): HTMLElement[] => [...(list.value?.querySelectorAll<HTMLElement>('[data-row]') ?? [])]

  const current = (): HTMLElement | null => document.activeElement?.closest<HTMLElement>('[data-row]') ?? null

  function walk(step: 1 | -1): void {
    const all = rows()
    const here = current()
    const from = here ? all.indexOf(here) : step === 1 ? -1 : all.length
    all[Math.max(0, Math.min(all.length - 1, from + step))]?.focus()
  }

  function press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.metaKey || event.altKey || isElsewhere(event.target)) return
    const arrows = current() !== null
    if (event.key === 'j' || (arrows && event.key === 'ArrowDown')) walk(1)
    else if (event.key === 'k' || (arrows && event.key === 'ArrowUp')) walk(-1)
    else if (event.key === 'm') current()?.querySelector<HTMLElement>('[data-menu]')?.click()
    else return
    event.preventDefault()
  }

  onMounted(() => addEventListener('keydown', press))
  onBeforeUnmount(() => removeEventListener('keydown', press))
}

/** Somebody types, or a dialog or menu is open: those keys are not the board's. */
export const isElsewhere = (target: EventTarget | null): boolean =>
  target instanceof Element &&
  target.closest('input, textarea, select, [contenteditable], .v-overlay') !== null
