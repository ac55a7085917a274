import type { Server as HttpServer } from 'node:http'
import type { ServerToClientEvents } from '@bellpull/contracts'
import { may } from '@bellpull/domain'
import { Server, type DefaultEventsMap, type Socket } from 'socket.io'
import type { Logger } from '../log.js'
import { toProblem } from '../http/problem.js'
import type { Actor, Authenticator } from '../http/session.js'
import { Gathered } from './gathered.js'
import { InOrder } from './in-order.js'
import type { Delta, Publisher } from './publisher.js'

/** Who is signed in, as the sockets ask. */
export interface LiveSessions extends Authenticator {
  /** Those of the given sessions that are still alive. */
  living(sessionIds: string[]): Promise<Set<string>>
}

export interface SocketServerOptions {
  readonly log: Logger
  /** A listener for whom more than this is queued is cut off, in bytes; it comes back by snapshot. */
  readonly maxQueuedBytes?: number
  /** How often queues are looked at, in milliseconds. */
  readonly queueCheckMs?: number
  /** How often sessions are looked at, in milliseconds: those that run out, or were ended by another process. */
  readonly sessionCheckMs?: number
}

interface SocketData {
  actor: Actor
}
type Emits = ServerToClientEvents & Record<string, (...args: never[]) => void>
type Client = Socket<DefaultEventsMap, Emits, DefaultEventsMap, SocketData>

const BOARD = 'board'
const sessionRoom = (sessionId: string): string => `session:${sessionId}`

/**
 * Socket.IO over WebSocket alone. Facts go out, nothing comes in. The server decides what a socket is told, by
 * the role of the person behind it; a socket lives as long as the session that opened it.
 */
export class SocketServer implements Publisher {
  readonly #options: Required<SocketServerOptions>
  #io: Server<DefaultEventsMap, Emits, DefaultEventsMap, SocketData> | null = null
  #timers: NodeJS.Timeout[] = []
  readonly #deltas = new InOrder((delta) => this.#io?.to(BOARD).emit('board:delta', delta as never))
  readonly #stock = new Gathered((catalogueItemIds) =>
    this.#io?.to(BOARD).emit('stock:changed', { catalogueItemIds }),
  )

  constructor(options: SocketServerOptions) {
    this.#options = { maxQueuedBytes: 1 << 20, queueCheckMs: 500, sessionCheckMs: 5_000, ...options }
  }

  /** Begins to take sockets on this server. */
  attach(http: HttpServer, sessions: LiveSessions): void {
    const io = new Server<DefaultEventsMap, Emits, DefaultEventsMap, SocketData>(http, {
      path: '/socket.io',
      transports: ['websocket'],
      serveClient: false,
      perMessageDeflate: false,
      connectTimeout: 10_000,
      // A line that died without a word is noticed within nine seconds, by both ends.
      pingInterval: 5_000,
      pingTimeout: 4_000,
      // A token is all that a client ever has to send.
      maxHttpBufferSize: 8_192,
    })
    io.use((socket, next) => {
      this.#admit(socket, sessions).then(
        () => next(),
        (error: unknown) => next(refusal(error)),
      )
    })
    io.on('connection', (socket) => this.#welcome(socket, sessions))
    this.#io = io
    this.#every(this.#options.queueCheckMs, () => this.#cutOffTheSlow())
    this.#every(this.#options.sessionCheckMs, () => void this.#closeTheEnded(sessions))
  }

  delta(delta: Delta): void {
    this.#deltas.add(delta)
  }

  stockChanged(catalogueItemIds: string[]): void {
    this.#stock.add(catalogueItemIds)
  }

  notice(message: { kind: string } & Record<string, unknown>): void {
    this.#io?.to(BOARD).emit('notice', message)
  }

  sessionEnded(sessionId: string): void {
    this.#io?.in(sessionRoom(sessionId)).emit('session:ended')
    this.#io?.in(sessionRoom(sessionId)).disconnectSockets(true)
  }

  /** How many sockets are open in this process. */
  get count(): number {
    return this.#io?.engine.clientsCount ?? 0
  }

  async close(): Promise<void> {
    for (const timer of this.#timers) clearInterval(timer)
    this.#timers = []
    this.#deltas.close()
    this.#stock.close()
    await this.#io?.close()
    this.#io = null
  }

  async #admit(socket: Client, sessions: LiveSessions): Promise<void> {
    const token: unknown = (socket.handshake.auth as { token?: unknown }).token
    socket.data.actor = await sessions.authenticate(typeof token === 'string' ? token : '')
  }

  #welcome(socket: Client, sessions: LiveSessions): void {
    const { role, sessionId } = socket.data.actor
    void socket.join([`role:${role}`, sessionRoom(sessionId)])
    if (may(role, 'board.read')) void socket.join(BOARD)
    // Commands travel by HTTP only; whoever sends one here is no client of ours.
    socket.onAny(() => socket.disconnect(true))
    // The session may have ended between the look at the token and the joining.
    sessions.living([sessionId]).then(
      (living) => {
        if (!living.has(sessionId)) this.sessionEnded(sessionId)
      },
      () => undefined,
    )
  }

  #cutOffTheSlow(): void {
    for (const socket of this.#io?.sockets.sockets.values() ?? []) {
      const queued = queuedBytes(socket)
      if (queued <= this.#options.maxQueuedBytes) continue
      this.#options.log.warn({ event: 'socket.cut-off', personId: socket.data.actor.id, queuedBytes: queued })
      socket.conn.close(true)
    }
  }

  async #closeTheEnded(sessions: LiveSessions): Promise<void> {
    const open = new Set(
      [...(this.#io?.sockets.sockets.values() ?? [])].map((socket) => socket.data.actor.sessionId),
    )
    if (open.size === 0) return
    try {
      const living = await sessions.living([...open])
      for (const sessionId of open) if (!living.has(sessionId)) this.sessionEnded(sessionId)
    } catch (error) {
      this.#options.log.warn(
        { event: 'socket.sessions-unknown', err: error },
        'sessions could not be looked at',
      )
    }
  }

  #every(ms: number, work: () => void): void {
    this.#timers.push(setInterval(work, ms).unref())
  }
}

/** What waits for a socket: in Engine.IO's buffer, and in the WebSocket beneath it. */
function queuedBytes(socket: Client): number {
  const { writeBuffer, transport } = socket.conn as unknown as {
    writeBuffer: ReadonlyArray<{ data?: unknown; options?: { wsPreEncodedFrame?: ReadonlyArray<Buffer> } }>
    transport: { socket?: { bufferedAmount?: number } }
  }
  const waiting = writeBuffer.reduce(
    (sum, packet) => sum + (typeof packet.data === 'string' ? packet.data.length : 0),
    0,
  )
  return waiting + (transport.socket?.bufferedAmount ?? 0)
}

function refusal(error: unknown): Error {
  const { code } = toProblem(error)
  return Object.assign(new Error(code), { data: { type: `urn:bellpull:problem:${code}` } })
}
