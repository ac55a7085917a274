import type { CaseView } from '@bellpull/contracts'
import { defineStore } from 'pinia'
import { computed, ref, shallowReactive } from 'vue'
import { casesApi } from '@/api/cases'

/** Today's cases. Refreshed one by one when the house says that one has changed, and whole after a lost line. */
export const useCasesStore = defineStore('cases', () => {
  const byId = shallowReactive(new Map<string, CaseView>())
  const phase = ref<'empty' | 'loading' | 'ready' | 'failed'>('empty')
  /** In order of start. */
  const today = computed(() => [...byId.values()].sort((a, b) => a.startsAt.localeCompare(b.startsAt)))

  let attempt = 0

  async function load(): Promise<void> {
    const mine = ++attempt
    if (phase.value !== 'ready') phase.value = 'loading'
    try {
      const cases = await casesApi.list()
      if (mine !== attempt) return
      byId.clear()
      for (const one of cases) byId.set(one.id, one)
      phase.value = 'ready'
    } catch {
      if (mine === attempt && phase.value === 'loading') phase.value = 'failed'
    }
  }

  /** Takes in a case that somebody has read or changed; an older state never replaces a newer one. */
  function put(one: CaseView): void {
    const known = byId.get(one.id)
    if (known === undefined || known.version <= one.version) byId.set(one.id, one)
  }

  /** Reads one case again. A case of another day is known as well, once asked for. */
  async function refresh(caseId: string): Promise<CaseView> {
    const one = await casesApi.get(caseId)
    put(one)
    return one
  }

  /** Today's cases of a room, in order of start. */
  const ofRoom = (number: number): CaseView[] => today.value.filter(({ room }) => room.number === number)

  /** The case that a room works on: in progress, else the next planned one, else the last. */
  function currentOfRoom(number: number): CaseView | null {
    const cases = ofRoom(number)
    const found =
      cases.find(({ status }) => status === 'inProgress') ?? cases.find(({ status }) => status === 'planned')
    return found ?? cases.findLast(({ status }) => status === 'closed') ?? null
  }

  function reset(): void {
    attempt += 1
    byId.clear()
    phase.value = 'empty'
  }

  return { byId, phase, today, load, put, refresh, ofRoom, currentOfRoom, reset }
})
