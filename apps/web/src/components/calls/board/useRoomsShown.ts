import { computed, ref } from 'vue'
import type { Role } from '@bellpull/domain'

export type RoomsShown = 'mine' | 'all'

const keyOf = (userId: string): string => `bellpull.dispatch.rooms.${userId}`

/** What somebody starts with: those who stay with a patient see their own rooms, everybody else all. */
export const startWith = (role: Role, hasRooms: boolean): RoomsShown =>
  role === 'circulator' && hasRooms ? 'mine' : 'all'

/** My rooms or all, remembered for each person on this device. */
export function useRoomsShown(userId: string, role: Role, hasRooms: boolean) {
  const chosen = ref<RoomsShown>(remembered(userId) ?? startWith(role, hasRooms))

  function choose(shown: RoomsShown): void {
    chosen.value = shown
    try {
      localStorage.setItem(keyOf(userId), shown)
    } catch {
      // A browser that keeps nothing starts afresh next time.
    }
  }
  return { shown: computed(() => chosen.value), choose }
}

function remembered(userId: string): RoomsShown | null {
  try {
    const kept = localStorage.getItem(keyOf(userId))
    return kept === 'mine' || kept === 'all' ? kept : null
  } catch {
    return null
  }
}
