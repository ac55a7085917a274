import { WebSocket, type RawData } from 'ws'
import { answer } from './child.js'
import { quantileOf } from './numbers.js'

/**
 * Screens that listen, in a process of their own. Both sides are listened to with the same bare WebSocket client;
 * for the product it speaks as much of Socket.IO's protocol as a listener needs.
 */

export interface Listen {
  readonly name: string
  readonly speaks: 'socket.io' | 'plain'
  readonly port: number
  readonly tokens: readonly string[]
  readonly count: number
}
export interface Heard {
  /** Events that some listener never got, and that one got twice. */
  readonly lost: number
  readonly doubled: number
  /** Events that came after a later one of the same room: costs that screen a reload. */
  readonly outOfOrder: number
  readonly p50Ms: number
  readonly p99Ms: number
}

interface Audience {
  readonly sockets: WebSocket[]
  /** Call -> when each listener heard of it (monotonic clock of the machine, ms); 0 is never. */
  heard: Map<string, Float64Array>
  doubled: number
  outOfOrder: number
  closed: number
  readonly lastRevisions: Map<string, Int32Array>
}

const audiences = new Map<string, Audience>()
const nowMs = (): number => Number(process.hrtime.bigint()) / 1e6

/** Everything that has to be known of an event stands at its beginning. */
const HEAD_BYTES = 220
const EVENT =
  /"roomId":"([0-9a-f-]{36})","revision":(\d+),"event":"[\w.]+","call":\{"id" ?: ?"([0-9a-f-]{36})"/

async function listen({ name, speaks, port, tokens, count }: Listen): Promise<void> {
  const audience: Audience = {
    sockets: [],
    heard: new Map(),
    doubled: 0,
    outOfOrder: 0,
    closed: 0,
    lastRevisions: new Map(),
  }
  audiences.set(name, audience)
  // A few at a time: the queue of connections that wait to be taken is short.
  for (let from = 0; from < count; from += 50)
    await Promise.all(
      Array.from({ length: Math.min(50, count - from) }, (_, n) => {
        const token = tokens[(from + n) % tokens.length] ?? ''
        return speaks === 'plain'
          ? openPlain(audience, count, port, token)
          : openSocketIo(audience, count, port, token)
      }),
    )
}

async function openPlain(audience: Audience, count: number, port: number, token: string): Promise<void> {
  const socket = new WebSocket(`ws://127.0.0.1:${port}/?token=${token}`, { perMessageDeflate: false })
  const index = audience.sockets.push(socket) - 1
  socket.on('message', (data) => note(audience, count, index, headOf(data)))
  await opened(audience, socket, (ready) => socket.once('open', ready))
}

async function openSocketIo(audience: Audience, count: number, port: number, token: string): Promise<void> {
  const socket = new WebSocket(`ws://127.0.0.1:${port}/socket.io/?EIO=4&transport=websocket`, {
    perMessageDeflate: false,
  })
  const index = audience.sockets.push(socket) - 1
  await opened(audience, socket, (ready, refused) =>
    socket.on('message', (data) => {
      const head = headOf(data)
      if (head.startsWith('42["board:delta"')) note(audience, count, index, head)
      else if (head === '2') socket.send('3')
      else if (head.startsWith('0')) socket.send(`40${JSON.stringify({ token })}`)
      else if (head.startsWith('40')) ready()
      else if (head.startsWith('44')) refused(new Error(`the socket was refused: ${head}`))
    }),
  )
}

function opened(
  audience: Audience,
  socket: WebSocket,
  when: (ready: () => void, refused: (error: Error) => void) => void,
): Promise<void> {
  return new Promise((resolve, reject) => {
    const late = setTimeout(() => reject(new Error('a listener was not let in within 30 s')), 30_000)
    const settle = (error?: Error): void => {
      clearTimeout(late)
      if (error) reject(error)
      else resolve()
    }
    when(() => settle(), settle)
    socket.on('error', settle)
    socket.on('close', () => {
      audience.closed += 1
      settle(new Error('a listener was cut off'))
    })
  })
}

/** @param data as the client gives it by default: one buffer. */
const headOf = (data: RawData): string => (data as Buffer).toString('latin1', 0, HEAD_BYTES)

function note(audience: Audience, count: number, index: number, head: string): void {
  const at = nowMs()
  const event = EVENT.exec(head)
  if (!event) throw new Error(`not an event: ${head}`)
  const [, roomId = '', revision = '', callId = ''] = event
  let heard = audience.heard.get(callId)
  if (!heard) audience.heard.set(callId, (heard = new Float64Array(count)))
  if (heard[index] !== 0) audience.doubled += 1
  heard[index] = at
  let last = audience.lastRevisions.get(roomId)
  if (!last) audience.lastRevisions.set(roomId, (last = new Int32Array(count)))
  if (Number(revision) < (last[index] ?? 0)) audience.outOfOrder += 1
  else last[index] = Number(revision)
}

function audienceOf(name: string): Audience {
  const audience = audiences.get(name)
  if (!audience) throw new Error(`no audience "${name}"`)
  return audience
}

/** Waits until every listener heard of every call, or 10 s. @param calls ids, with the time of the tap where it matters. */
async function heard({
  name,
  calls,
}: {
  name: string
  calls: { id: string; tappedMs: number }[]
}): Promise<Heard> {
  const audience = audienceOf(name)
  if (audience.closed > 0) throw new Error(`${audience.closed} listeners were cut off`)
  const deadline = nowMs() + 10_000
  const missing = (): number =>
    calls.reduce((sum, { id }) => {
      const times = audience.heard.get(id)
      return (
        sum + (times ? times.reduce((none, at) => none + (at === 0 ? 1 : 0), 0) : audience.sockets.length)
      )
    }, 0)
  while (missing() > 0 && nowMs() < deadline) await new Promise((resolve) => setTimeout(resolve, 20))
  const delays = new Float64Array(calls.length * audience.sockets.length)
  calls.forEach(({ id, tappedMs }, n) =>
    audience.heard
      .get(id)
      ?.forEach((at, index) => (delays[n * audience.sockets.length + index] = at - tappedMs)),
  )
  delays.sort()
  const result = {
    lost: missing(),
    doubled: audience.doubled,
    outOfOrder: audience.outOfOrder,
    p50Ms: quantileOf(delays, 0.5),
    p99Ms: quantileOf(delays, 0.99),
  }
  Object.assign(audience, { heard: new Map(), doubled: 0, outOfOrder: 0 })
  return result
}

answer({
  listen,
  heard,
  async leave(name: string): Promise<void> {
    const { sockets } = audienceOf(name)
    audiences.delete(name)
    await Promise.all(
      sockets.map(
        (socket) =>
          new Promise<void>((resolve) => {
            if (socket.readyState === WebSocket.CLOSED) resolve()
            socket.once('close', () => resolve())
            socket.close()
          }),
      ),
    )
  },
})
