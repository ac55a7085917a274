import { computed, type ComputedRef } from 'vue'
import { useRoute } from 'vue-router'
import { useCasesStore } from '@/stores/cases'
import { usePeopleStore } from '@/stores/people'
import { useSessionStore } from '@/stores/session'

/** The room on screen; elsewhere the one of this person's rooms that is at work, else their first, else any. */
export function useRoomNumber(): ComputedRef<number | null> {
  const route = useRoute()
  const session = useSessionStore()
  const cases = useCasesStore()
  const people = usePeopleStore()
  return computed(() => {
    const onScreen = Number(route.params['number'])
    if (route.name === 'room' && Number.isInteger(onScreen)) return onScreen
    const atWork = session.myRooms.find((number) => cases.currentOfRoom(number)?.status === 'inProgress')
    return atWork ?? session.myRooms[0] ?? people.rooms[0]?.number ?? null
  })
}
