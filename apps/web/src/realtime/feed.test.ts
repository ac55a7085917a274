import { afterEach, describe, expect, test, vi } from 'vitest'
import { ref } from 'vue'
import { aDelta } from '../../test/views'
import { feedBoard, listenToHouse, type BoardPhase, type BoardSink } from './feed'
import type { FeedSocket } from './socket'

/** A socket whose events the test makes. */
function aSocket(connected = false) {
  const heard = new Map<string, Set<(message?: unknown) => void>>()
  const socket = {
    connected,
    on: (event: string, listener: () => void) =>
      void heard.set(event, (heard.get(event) ?? new Set()).add(listener)),
    off: (event: string, listener: () => void) => void heard.get(event)?.delete(listener),
  }
  const say = (event: string, message?: unknown) => {
    if (event === 'connect') socket.connected = true
    if (event === 'disconnect') socket.connected = false
    for (const listener of heard.get(event) ?? []) listener(message)
  }
  return { socket: socket as unknown as FeedSocket, say, heard }
}

function aBoard() {
  const phase = ref<BoardPhase>('offline')
  const board = {
    get phase() {
      return phase.value
    },
    load: vi.fn(() => Promise.resolve()),
    receive: vi.fn(),
    goOffline: vi.fn(),
  } satisfies BoardSink
  return { board, phase }
}

afterEach(() => {
  vi.useRealTimers()
})

describe('the board is loaded', () => {
  test('when the line stands, at once where it stands already, and after each reconnect', () => {
    const { socket, say } = aSocket()
    const { board } = aBoard()
    feedBoard(socket, board)
    expect(board.load).toHaveBeenCalledTimes(0)
    say('connect')
    say('disconnect')
    say('connect')
    expect(board.load).toHaveBeenCalledTimes(2)
    expect(board.goOffline).toHaveBeenCalledTimes(1)

    const standing = aBoard()
    feedBoard(aSocket(true).socket, standing.board)
    expect(standing.board.load).toHaveBeenCalledTimes(1)
  })

  test('when it has fallen behind', () => {
    const { board, phase } = aBoard()
    feedBoard(aSocket(true).socket, board)
    phase.value = 'current'
    phase.value = 'behind'
    expect(board.load).toHaveBeenCalledTimes(2)
  })

  test('when a delta cannot be read, instead of being guessed at', () => {
    const { socket, say } = aSocket(true)
    const { board } = aBoard()
    feedBoard(socket, board)
    say('board:delta', { ...aDelta(2), roomId: 'the third' })
    expect(board.receive).not.toHaveBeenCalled()
    expect(board.load).toHaveBeenCalledTimes(2)
  })

  test('again within two seconds after a load that failed, but only while the line stands', async () => {
    vi.useFakeTimers()
    const { socket, say } = aSocket(true)
    const { board } = aBoard()
    board.load.mockRejectedValueOnce(new Error('line'))
    feedBoard(socket, board)
    await vi.advanceTimersByTimeAsync(2_000)
    expect(board.load).toHaveBeenCalledTimes(2)

    board.load.mockRejectedValueOnce(new Error('line'))
    say('connect')
    say('disconnect')
    await vi.advanceTimersByTimeAsync(10_000)
    expect(board.load).toHaveBeenCalledTimes(3)
  })
})

test('a delta may gain fields', () => {
  const { socket, say } = aSocket(true)
  const { board } = aBoard()
  feedBoard(socket, board)
  say('board:delta', { ...aDelta(2), since: 'a newer release' })
  expect(board.receive).toHaveBeenCalledWith(aDelta(2))
})

test('once stopped, nothing is heard and nothing is loaded', async () => {
  vi.useFakeTimers()
  const { socket, say, heard } = aSocket(true)
  const { board, phase } = aBoard()
  board.load.mockRejectedValueOnce(new Error('line'))
  const stop = feedBoard(socket, board)
  await vi.advanceTimersByTimeAsync(0)
  stop()
  say('connect')
  phase.value = 'behind'
  await vi.advanceTimersByTimeAsync(10_000)
  expect(board.load).toHaveBeenCalledTimes(1)
  expect([...heard.values()].every((listeners) => listeners.size === 0)).toBe(true)
})

test('stock, notices and the end of the session are told; what cannot be read is left out', () => {
  const { socket, say } = aSocket(true)
  const told: unknown[] = []
  const stop = listenToHouse(socket, {
    stockChanged: (changed) => told.push(changed.catalogueItemIds.length),
    notice: (message) => told.push(message),
    sessionEnded: () => told.push('ended'),
  })
  say('stock:changed', { catalogueItemIds: ['00000000-0000-4000-8000-000000000501'] })
  say('stock:changed', { catalogueItemIds: 'all' })
  say('notice', { kind: 'case.changed', caseId: 'x' })
  say('notice', 'hello')
  say('session:ended')
  stop()
  say('session:ended')
  expect(told).toEqual([1, { kind: 'case.changed', caseId: 'x' }, 'ended'])
})
