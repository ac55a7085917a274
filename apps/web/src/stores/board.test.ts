import type { BoardSnapshot } from '@bellpull/contracts'
import { createPinia, setActivePinia } from 'pinia'
import { beforeEach, describe, expect, test, vi } from 'vitest'
import { aCall, aDelta, id } from '../../test/views'
import { boardApi } from '@/api/board'
import { useBoardStore } from './board'
import { useClockStore } from './clock'

vi.mock('@/api/board', () => ({ boardApi: { snapshot: vi.fn() } }))

const ROOM = id(103)
const OTHER_ROOM = id(107)
const asked = vi.mocked(boardApi.snapshot)

/** The board as it was at these revisions, with call 1 in room 3. */
const snapshot = (revision: number, more: Partial<BoardSnapshot> = {}): BoardSnapshot => ({
  revisions: { [ROOM]: revision, [OTHER_ROOM]: 40 },
  calls: [aCall({ version: revision, revision })],
  ...more,
})

/** An answer that comes when the test says so. */
function answerLater() {
  let give: (value: BoardSnapshot) => void = () => undefined
  let fail: (error: Error) => void = () => undefined
  asked.mockImplementationOnce(
    () =>
      new Promise((resolve, reject) => {
        give = resolve
        fail = reject
      }),
  )
  return { give: (value: BoardSnapshot) => give(value), fail: () => fail(new Error('line')) }
}

async function loadedAt(revision: number) {
  const board = useBoardStore()
  asked.mockResolvedValueOnce(snapshot(revision))
  await board.load()
  return board
}

const versionOf = (board: ReturnType<typeof useBoardStore>) => board.byId.get(id(1))?.version

beforeEach(() => {
  setActivePinia(createPinia())
  asked.mockReset()
})

describe('deltas on a board at revision 5', () => {
  test.each([
    { what: 'the next one is applied', come: [6], phase: 'current', version: 6 },
    { what: 'known ones change nothing', come: [4, 5], phase: 'current', version: 5 },
    { what: 'the same one twice counts once', come: [6, 6], phase: 'current', version: 6 },
    { what: 'two that came in the wrong order', come: [7, 6], phase: 'current', version: 7 },
    { what: 'a gap asks for a load and applies nothing behind it', come: [7], phase: 'behind', version: 5 },
    { what: 'a gap after one that follows', come: [6, 8], phase: 'behind', version: 6 },
  ])('$what', async ({ come, phase, version }) => {
    const board = await loadedAt(5)
    for (const revision of come) board.receive(aDelta(revision, { version: revision }))
    expect(board.phase).toBe(phase)
    expect(versionOf(board)).toBe(version)
  })

  test('each room counts for itself', async () => {
    const board = await loadedAt(5)
    const other = { id: id(2), room: { id: OTHER_ROOM, number: 7 } }
    board.receive(aDelta(41, other))
    board.receive(aDelta(6, { version: 6 }))
    expect(board.phase).toBe('current')
    board.receive(aDelta(43, other))
    expect(board.phase).toBe('behind')
    expect(board.revisions.get(OTHER_ROOM)).toBe(41)
  })

  test('a call that is done leaves the board, and listeners still hear of it', async () => {
    const board = await loadedAt(5)
    const heard: string[] = []
    const stop = board.onCall((call, event) => heard.push(`${call.id.at(-1)} ${event}`))
    board.receive(aDelta(6, { open: false }))
    expect(board.byId.size).toBe(0)
    stop()
    board.receive(aDelta(7))
    expect(heard).toEqual(['1 item.accepted'])
  })
})

describe('each way in which a board can go wrong', () => {
  test('a delta during the load waits for the snapshot, and is applied where it follows', async () => {
    const board = useBoardStore()
    const later = answerLater()
    const loading = board.load()
    board.receive(aDelta(6, { version: 6 }))
    board.receive(aDelta(5, { version: 5 }))
    expect(board.calls).toEqual([])
    later.give(snapshot(5))
    await loading
    expect([board.phase, versionOf(board)]).toEqual(['current', 6])
  })

  test('a delta during the load that leaves a gap asks for another load', async () => {
    const board = useBoardStore()
    const later = answerLater()
    const loading = board.load()
    board.receive(aDelta(9, { version: 9 }))
    later.give(snapshot(5))
    await loading
    expect([board.phase, versionOf(board)]).toEqual(['behind', 5])
  })

  test('a line lost during the load does not end as current', async () => {
    const board = useBoardStore()
    const later = answerLater()
    const loading = board.load()
    board.goOffline()
    later.give(snapshot(5))
    await loading
    expect([board.phase, board.calls.length]).toEqual(['offline', 0])
  })

  test('a snapshot begun before a reconnect is dropped, however late it comes', async () => {
    const board = useBoardStore()
    const before = answerLater()
    const first = board.load()
    const after = answerLater()
    const second = board.load()
    after.give(snapshot(9))
    await second
    before.give(snapshot(5))
    await first
    expect([board.phase, versionOf(board)]).toEqual(['current', 9])
  })

  test('a load that fails leaves the board offline, and what it showed', async () => {
    const board = await loadedAt(5)
    const later = answerLater()
    const loading = board.load()
    later.fail()
    await expect(loading).rejects.toThrow('line')
    expect([board.phase, versionOf(board)]).toEqual(['offline', 5])
  })

  test('a superseded load that fails changes nothing', async () => {
    const board = useBoardStore()
    const before = answerLater()
    const first = board.load().catch(() => 'failed')
    asked.mockResolvedValueOnce(snapshot(9))
    await board.load()
    before.fail()
    expect(await first).toBe('failed')
    expect(board.phase).toBe('current')
  })

  test('a snapshot takes away calls that were finished meanwhile', async () => {
    const board = await loadedAt(5)
    asked.mockResolvedValueOnce(snapshot(8, { calls: [] }))
    await board.load()
    expect(board.calls).toEqual([])
  })

  test('what waited before a lost line is not applied to the snapshot after it', async () => {
    const board = await loadedAt(5)
    board.receive(aDelta(7, { version: 7 }))
    board.goOffline()
    asked.mockResolvedValueOnce(snapshot(6))
    await board.load()
    expect([board.phase, versionOf(board)]).toEqual(['current', 6])
  })

  test('a room that the house does not know does not make the board load for ever', async () => {
    const board = useBoardStore()
    const later = answerLater()
    const loading = board.load()
    board.receive(aDelta(3, { room: { id: id(199), number: 99 } }))
    later.give(snapshot(5))
    await loading
    expect(board.phase).toBe('current')
  })
})

test('the age is nothing while current, and counts from the moment the line was lost', async () => {
  vi.useFakeTimers({ now: Date.parse('2032-05-12T10:52:00Z') })
  try {
    const clock = useClockStore()
    clock.start()
    const board = useBoardStore()
    expect(board.ageMs).toBeNull()
    asked.mockResolvedValueOnce(snapshot(5))
    await board.load()
    vi.advanceTimersByTime(30_000)
    expect(board.ageMs).toBe(0)
    board.goOffline()
    vi.advanceTimersByTime(12_000)
    expect(board.ageMs).toBe(12_000)
    clock.stop()
  } finally {
    vi.useRealTimers()
  }
})

test('another person starts with an empty board', async () => {
  const board = await loadedAt(5)
  board.reset()
  expect([board.calls.length, board.phase, board.ageMs]).toEqual([0, 'offline', null])
})
