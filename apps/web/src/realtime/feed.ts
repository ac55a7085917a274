import {
  boardDelta,
  notice,
  stockChanged,
  type BoardDelta,
  type Notice,
  type StockChanged,
} from '@bellpull/contracts'
import { watch } from 'vue'
import { retryDelayMs, type FeedSocket } from './socket'

export type BoardPhase = 'offline' | 'loading' | 'behind' | 'current'

/** What is fed: the board's store. */
export interface BoardSink {
  readonly phase: BoardPhase
  load(): Promise<void>
  receive(delta: BoardDelta): void
  goOffline(): void
}

/** Listens first, then loads: a delta between the two waits in the store. Returns the way to stop. */
export function feedBoard(socket: FeedSocket, board: BoardSink): () => void {
  let retry: ReturnType<typeof setTimeout> | undefined

  function load(): void {
    clearTimeout(retry)
    board.load().catch(() => {
      if (socket.connected) retry = setTimeout(load, retryDelayMs())
    })
  }
  function onDelta(message: unknown): void {
    const delta = boardDelta.safeParse(message)
    // A tablet left open across a renewal of the house may meet a newer contract.
    if (delta.success) board.receive(delta.data)
    else load()
  }
  function lost(): void {
    clearTimeout(retry)
    board.goOffline()
  }

  const unwatch = watch(
    () => board.phase,
    (phase) => {
      if (phase === 'behind') load()
    },
    { flush: 'sync' },
  )
  socket.on('board:delta', onDelta)
  socket.on('connect', load)
  socket.on('disconnect', lost)
  if (socket.connected) load()

  return () => {
    clearTimeout(retry)
    unwatch()
    socket.off('board:delta', onDelta)
    socket.off('connect', load)
    socket.off('disconnect', lost)
  }
}

export interface HouseListeners {
  stockChanged(changed: StockChanged): void
  notice(message: Notice): void
  sessionEnded(): void
}

/** Everything beside the board; what cannot be read is left out, each is only a hint to look again. */
export function listenToHouse(socket: FeedSocket, listeners: HouseListeners): () => void {
  function onStock(message: unknown): void {
    const changed = stockChanged.safeParse(message)
    if (changed.success) listeners.stockChanged(changed.data)
  }
  function onNotice(message: unknown): void {
    const read = notice.safeParse(message)
    if (read.success) listeners.notice(read.data)
  }
  const onEnded = (): void => listeners.sessionEnded()
  socket.on('stock:changed', onStock)
  socket.on('notice', onNotice)
  socket.on('session:ended', onEnded)
  return () => {
    socket.off('stock:changed', onStock)
    socket.off('notice', onNotice)
    socket.off('session:ended', onEnded)
  }
}
