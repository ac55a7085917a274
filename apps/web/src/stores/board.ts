import type { BoardDelta, CallView, ItemView } from '@bellpull/contracts'
import { defineStore } from 'pinia'
import { computed, ref, shallowReactive } from 'vue'
import { boardApi } from '@/api/board'
import type { BoardPhase } from '@/realtime/feed'
import { useClockStore } from './clock'

/** One line of a board: an item, and the call that it belongs to. */
export interface BoardRow {
  readonly call: CallView
  readonly item: ItemView
}

type Heard = (call: CallView, event: string) => void

/**
 * Every open call of the house: a snapshot, and deltas on top of it. Each room counts its own revisions without
 * a gap, so a delta that is not the next one of its room shows that something was missed.
 */
export const useBoardStore = defineStore('board', () => {
  const clock = useClockStore()
  const byId = shallowReactive(new Map<string, CallView>())
  const revisions = shallowReactive(new Map<string, number>())
  /** Only `current` may be trusted; in any other phase the screen says so. `behind` asks for a load. */
  const phase = ref<BoardPhase>('offline')
  /** How often a snapshot has been taken in: whoever keeps data beside the board loads again with it. */
  const loads = ref(0)
  /** When the board was last known to be right; `null` before the first load. */
  const rightAtMs = ref<number | null>(null)

  const calls = computed(() => [...byId.values()])
  const rows = computed<BoardRow[]>(() =>
    calls.value.flatMap((call) => call.items.map((item) => ({ call, item }))),
  )
  /** How old the data is, in milliseconds: 0 while current, `null` when there is none yet. */
  const ageMs = computed(() => {
    if (phase.value === 'current') return 0
    return rightAtMs.value === null ? null : Math.max(0, clock.nowMs - rightAtMs.value)
  })

  const waiting = new Map<string, Map<number, BoardDelta>>()
  const listeners = new Set<Heard>()
  let attempt = 0

  function enter(next: BoardPhase): void {
    if (phase.value === 'current' && next !== 'current') rightAtMs.value = clock.nowMs
    phase.value = next
  }

  /**
   * Always a fresh read: one begun before a reconnect may predate what was missed, so it is dropped.
   *
   * @throws {ApiProblem | NotSent} the snapshot could not be read; the board is offline then.
   */
  async function load(): Promise<void> {
    const mine = ++attempt
    enter('loading')
    try {
      const snapshot = await boardApi.snapshot()
      if (mine !== attempt) return
      byId.clear()
      for (const call of snapshot.calls) byId.set(call.id, call)
      revisions.clear()
      for (const [roomId, revision] of Object.entries(snapshot.revisions)) revisions.set(roomId, revision)
      // A room that the snapshot does not know is none of this board's.
      for (const roomId of waiting.keys()) if (!revisions.has(roomId)) waiting.delete(roomId)
      for (const roomId of waiting.keys()) catchUp(roomId)
      settle()
      loads.value += 1
    } catch (error) {
      if (mine === attempt) goOffline()
      throw error
    }
  }

  function receive(delta: BoardDelta): void {
    const room = waiting.get(delta.roomId) ?? new Map<number, BoardDelta>()
    waiting.set(delta.roomId, room.set(delta.revision, delta))
    if (phase.value !== 'current' && phase.value !== 'behind') return
    catchUp(delta.roomId)
    settle()
  }

  /** Applies what follows on in one room without a gap, in order of revision, whatever the order of arrival. */
  function catchUp(roomId: string): void {
    const room = waiting.get(roomId)
    if (room === undefined) return
    let revision = revisions.get(roomId) ?? Number.NEGATIVE_INFINITY
    for (let next = room.get(revision + 1); next; next = room.get(revision + 1)) {
      apply(next)
      revision = next.revision
      revisions.set(roomId, revision)
    }
    for (const known of room.keys()) if (known <= revision) room.delete(known)
    if (room.size === 0) waiting.delete(roomId)
  }

  function apply({ call, event }: BoardDelta): void {
    if (call.open) byId.set(call.id, call)
    else byId.delete(call.id)
    for (const heard of listeners) heard(call, event)
  }

  const settle = (): void => enter(waiting.size === 0 ? 'current' : 'behind')

  /** The line is lost. What is waiting was sent before it, so the next snapshot holds it. */
  function goOffline(): void {
    attempt += 1
    waiting.clear()
    enter('offline')
  }

  /** Forgets everything: another person may see something else. */
  function reset(): void {
    goOffline()
    byId.clear()
    revisions.clear()
    rightAtMs.value = null
  }

  /** Told of every call that a delta has brought, finished ones too. Returns the way to stop. */
  function onCall(heard: Heard): () => void {
    listeners.add(heard)
    return () => listeners.delete(heard)
  }

  return { phase, loads, ageMs, byId, revisions, calls, rows, load, receive, goOffline, reset, onCall }
})
