import type { EventView } from '@bellpull/contracts'
import { flushPromises } from '@vue/test-utils'
import { createPinia, setActivePinia } from 'pinia'
import { afterEach, beforeEach, expect, test, vi } from 'vitest'
import { effectScope } from 'vue'
import { eventsApi } from '@/api/events'
import { NotSent } from '@/api/problem'
import { useBoardStore } from '@/stores/board'
import { aCall } from '../../../test/views'
import { useCaseEvents } from './useCaseEvents'

const CASE = aCall().caseId
let log: EventView[] = []
const line = (n: number): EventView => ({
  id: `r.${n}`,
  at: '2026-06-02T10:46:00.000Z',
  type: 'item.accepted',
  caseId: CASE,
  callId: null,
  itemId: null,
  roomId: 'r',
  actor: { id: 'a', initials: 'A', name: 'A' },
  data: {},
})

/** A house that gives two lines a page; the cursor counts the lines told. */
const page = vi.spyOn(eventsApi, 'page')
beforeEach(() => {
  setActivePinia(createPinia())
  log = [1, 2, 3, 4, 5].map(line)
  page.mockReset().mockImplementation(({ after = '0' }) => {
    const items = log.slice(Number(after), Number(after) + 2)
    return Promise.resolve({
      items,
      nextCursor: items.length === 0 ? null : String(Number(after) + items.length),
    })
  })
})
const scope = effectScope()
afterEach(() => vi.clearAllMocks())

const open = () => scope.run(() => useCaseEvents(CASE))!

test('reads every page to the end', async () => {
  const { events, phase } = open()
  await flushPromises()
  expect(phase.value).toBe('ready')
  expect(events.value).toEqual(log)
})

test('reads on from there when something of the case has changed, and tells no line twice', async () => {
  const board = useBoardStore()
  const { events } = open()
  await flushPromises()
  log.push(line(6), line(7), line(8))
  board.revisions.set(aCall().room.id, 1)
  board.phase = 'current'
  const calls = page.mock.calls.length
  board.receive({
    roomId: aCall().room.id,
    revision: 2,
    event: 'item.accepted',
    call: aCall({ revision: 2 }),
  })
  board.receive({
    roomId: aCall().room.id,
    revision: 3,
    event: 'item.accepted',
    call: aCall({ revision: 3 }),
  })
  await flushPromises()
  expect(events.value).toEqual(log)
  expect(page.mock.calls[calls]?.[0]).toMatchObject({ after: '5' })
})

test('says that it failed, and begins again when asked', async () => {
  page.mockRejectedValueOnce(new NotSent('offline'))
  const { events, phase, load } = open()
  await flushPromises()
  expect(phase.value).toBe('failed')
  await load()
  expect(phase.value).toBe('ready')
  expect(events.value).toEqual(log)
})
