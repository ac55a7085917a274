import { shallowRef, watch } from 'vue'
import type { Router } from 'vue-router'
import { mayOpen } from '@/composables/access'
import { useSessionStore } from '@/stores/session'

/** After signing in the first screen comes first; the others follow this much later, in milliseconds. */
const PRELOAD_AFTER_MS = 8_000

/** The page that somebody asked for and that could not be loaded. */
export const lostPage = shallowRef<string | null>(null)

/**
 * Pages are loaded when they are first opened. The ones that this person may open are fetched ahead, so that a
 * line that is away keeps nobody from another screen; one that could not be loaded is said to be lost.
 */
export function followPages(router: Router): void {
  const session = useSessionStore()
  let timer: ReturnType<typeof setTimeout> | undefined

  router.onError((_error, to) => {
    lostPage.value = to.fullPath
  })
  router.afterEach((_to, _from, failure) => {
    if (!failure) lostPage.value = null
  })
  watch(
    () => session.role,
    (role) => {
      clearTimeout(timer)
      if (role === null) return
      timer = setTimeout(() => {
        for (const { meta, components } of router.getRoutes()) {
          const page = components?.['default']
          const mine = meta.screen !== undefined && mayOpen(role, meta.screen)
          // Not loaded yet: still the function that loads it.
          if (mine && typeof page === 'function')
            void (page as () => Promise<unknown>)().catch(() => undefined)
        }
      }, PRELOAD_AFTER_MS)
    },
  )
}
