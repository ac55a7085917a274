import type { PersonRef, RoomView } from '@bellpull/contracts'
import { defineStore } from 'pinia'
import { computed, shallowRef } from 'vue'
import { peopleApi } from '@/api/people'

/** Who works here, and the operating rooms: loaded once after signing in. */
export const usePeopleStore = defineStore('people', () => {
  const people = shallowRef<readonly PersonRef[]>([])
  const rooms = shallowRef<readonly RoomView[]>([])
  const byId = computed(() => new Map(people.value.map((person) => [person.id, person])))

  /** @throws {ApiProblem | NotSent} */
  async function load(): Promise<void> {
    ;[people.value, rooms.value] = await Promise.all([peopleApi.list(), peopleApi.rooms()])
  }

  function reset(): void {
    people.value = []
    rooms.value = []
  }

  return { people, rooms, byId, load, reset }
})
