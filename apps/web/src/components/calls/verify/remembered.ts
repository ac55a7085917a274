import { ref, watch, type Ref } from 'vue'
import { METHODS, type Method } from './ready'

const KEY = 'bellpull.secondCheck'

function kept(): Method {
  try {
    const found = localStorage.getItem(KEY)
    return METHODS.find((one) => one === found) ?? 'spoken'
  } catch {
    return 'spoken'
  }
}

const method = ref<Method>(kept())

watch(method, (chosen) => {
  try {
    localStorage.setItem(KEY, chosen)
  } catch {
    // A browser that keeps nothing asks again next time.
  }
})

/** How the second check is taken on this device: chosen once, remembered. */
export const rememberedMethod = (): Ref<Method> => method

const checkers = new Map<string, Ref<string | null>>()

/** Who last checked with this person in this case, since the page was loaded; nobody to begin with. */
export function rememberedChecker(caseId: string, meId: string): Ref<string | null> {
  const key = `${meId} ${caseId}`
  const known = checkers.get(key) ?? ref<string | null>(null)
  checkers.set(key, known)
  return known
}
