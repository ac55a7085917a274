import type { Notice, StockChanged } from '@bellpull/contracts'
import { defineStore } from 'pinia'
import { http } from '@/api/http'
import { feedBoard, listenToHouse } from '@/realtime/feed'
import { openSocket, type FeedSocket } from '@/realtime/socket'
import { useBoardStore } from './board'
import { useCasesStore } from './cases'
import { useClockStore } from './clock'

/** The line to the house: one socket for as long as somebody is signed in, and who wants to hear what. */
export const useLiveStore = defineStore('live', () => {
  const board = useBoardStore()
  const cases = useCasesStore()
  const clock = useClockStore()

  const onStock = new Set<(changed: StockChanged) => void>()
  const onNotice = new Set<(message: Notice) => void>()
  let socket: FeedSocket | null = null
  let stops: (() => void)[] = []

  /** @param ended what to do when the house says that the session is over. */
  function connect(ended: () => void): void {
    if (socket !== null) return
    const opened = openSocket(http)
    socket = opened
    const lost = (): void => board.goOffline()
    const back = (): void => {
      // Waiting for Socket.IO's next try would only cost time.
      if (!opened.connected) opened.disconnect().connect()
    }
    const woken = (): void => {
      opened.disconnect().connect()
    }
    opened.on('connect', refreshCases)
    addEventListener('offline', lost)
    addEventListener('online', back)
    stops = [
      feedBoard(opened, board),
      listenToHouse(opened, { stockChanged: hearStock, notice: hearNotice, sessionEnded: ended }),
      clock.onWake(woken),
      () => removeEventListener('offline', lost),
      () => removeEventListener('online', back),
    ]
    opened.connect()
  }

  const refreshCases = (): void => void cases.load()

  function hearStock(changed: StockChanged): void {
    for (const heard of onStock) heard(changed)
  }

  function hearNotice(message: Notice): void {
    if (message.kind === 'case.changed' && typeof message['caseId'] === 'string')
      cases.refresh(message['caseId']).catch(refreshCases)
    for (const heard of onNotice) heard(message)
  }

  function disconnect(): void {
    for (const stop of stops) stop()
    stops = []
    socket?.disconnect()
    socket = null
    board.goOffline()
  }

  /** Returns the way to stop. */
  function onStockChanged(heard: (changed: StockChanged) => void): () => void {
    onStock.add(heard)
    return () => onStock.delete(heard)
  }

  /** Returns the way to stop. */
  function onNoticeOf(kind: string, heard: (message: Notice) => void): () => void {
    const only = (message: Notice): void => {
      if (message.kind === kind) heard(message)
    }
    onNotice.add(only)
    return () => onNotice.delete(only)
  }

  return { connect, disconnect, onStockChanged, onNotice: onNoticeOf }
})
