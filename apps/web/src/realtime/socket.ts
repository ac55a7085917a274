import type { ServerToClientEvents } from '@bellpull/contracts'
import { io, type Socket } from 'socket.io-client'

export type FeedSocket = Socket<ServerToClientEvents, Record<string, never>>

/** Where the socket takes its token from, and says that one was refused. */
export interface Tokens {
  freshToken(): Promise<string>
  tokenRefused(): void
}

/** After a refused or broken connection the next try comes within this, in milliseconds. */
const RETRY_MS = { least: 500, most: 2_000 }

/** Spread, so that a house full of screens does not come back in one instant. */
export const retryDelayMs = (): number => RETRY_MS.least + Math.random() * (RETRY_MS.most - RETRY_MS.least)

/**
 * A socket to the house, not yet connected. It comes back by itself: after a broken line by Socket.IO's own
 * retries, after a refused token with a renewed one. Facts come in; nothing is ever sent.
 */
export function openSocket(tokens: Tokens, url?: string): FeedSocket {
  const options = {
    path: '/socket.io',
    transports: ['websocket'],
    autoConnect: false,
    forceNew: true,
    timeout: 4_000,
    reconnectionDelay: 800,
    reconnectionDelayMax: RETRY_MS.most,
    randomizationFactor: 0.4,
    auth: (give: (data: object) => void) => {
      tokens.freshToken().then(
        (token) => give({ token }),
        // Without a line there is no token; the refusal that follows leads to the next try.
        () => give({ token: '' }),
      )
    },
  }
  const socket: FeedSocket = url === undefined ? io(options) : io(url, options)
  let retry: ReturnType<typeof setTimeout> | undefined

  function later(): void {
    clearTimeout(retry)
    retry = setTimeout(() => socket.connect(), retryDelayMs())
  }
  socket.on('connect_error', () => {
    // Active: Socket.IO tries again itself. Else the house has refused the token.
    if (socket.active) return
    tokens.tokenRefused()
    later()
  })
  socket.on('disconnect', (reason) => {
    // The house closed it: it restarts, or the session ended; then the next token is refused.
    if (reason === 'io server disconnect') later()
    else if (reason === 'io client disconnect') clearTimeout(retry)
  })
  socket.on('connect', () => clearTimeout(retry))
  return socket
}
