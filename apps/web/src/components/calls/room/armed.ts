import { onScopeDispose, readonly, ref, watch, type Ref } from 'vue'

/** A second touch of a double touch falls within this, in milliseconds (common practice, no source). */
export const SECOND_TOUCH_MS = 700

/**
 * Buttons that come to stand where another one was touched do nothing for a moment: the second touch of a
 * double touch must not fall on a command that nobody has read.
 *
 * @param shown changes when other buttons come into view.
 */
export function useArmed(shown: () => unknown): Readonly<Ref<boolean>> {
  const armed = ref(false)
  let timer: ReturnType<typeof setTimeout> | undefined

  function begin(): void {
    armed.value = false
    clearTimeout(timer)
    timer = setTimeout(() => {
      armed.value = true
    }, SECOND_TOUCH_MS)
  }
  watch(shown, begin, { immediate: true, flush: 'sync' })
  onScopeDispose(() => clearTimeout(timer))
  return readonly(armed)
}
