import { connect as connectTcp } from 'node:net'
import { io, type Socket } from 'socket.io-client'
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest'
import { startTestApi, type SignedIn, type TestApi } from '../../../test/app.js'

const TIMEOUT = { timeout: 5_000 }
let api: TestApi
let person: SignedIn
const sockets: Socket[] = []

beforeAll(async () => {
  api = await startTestApi({ sockets: true })
  person = await api.signInAs('circulator')
})
afterEach(() => {
  for (const socket of sockets.splice(0)) socket.disconnect()
})
afterAll(() => api.close())

interface Listener {
  readonly socket: Socket
  readonly heard: [event: string, message: unknown][]
}

/** A client that keeps everything it is told. */
function listen(token: unknown, options: object = {}): Listener {
  const socket = io(api.url, {
    path: '/socket.io',
    transports: ['websocket'],
    auth: { token },
    reconnection: false,
    forceNew: true,
    ...options,
  })
  sockets.push(socket)
  const heard: [string, unknown][] = []
  socket.onAny((event: string, message: unknown) => heard.push([event, message]))
  return { socket, heard }
}

async function connected(token: string): Promise<Listener> {
  const listener = listen(token)
  await vi.waitFor(() => expect(listener.socket.connected).toBe(true), TIMEOUT)
  return listener
}
const refusal = (socket: Socket): Promise<Error & { data?: { type: string } }> =>
  new Promise((resolve) => {
    socket.once('connect_error', resolve)
  })
const publisher = () => api.house.publisher
const delta = (revision: number) => ({ roomId: 'r', revision, event: 'call.called', call: { id: 'c' } })

describe('a socket', () => {
  it.each([
    ['no token', undefined],
    ['nonsense', 'nonsense'],
    ['something that is no text', { token: 1 }],
  ])('with %s is refused', async (_what, token) => {
    const { socket } = listen(token)
    expect((await refusal(socket)).data).toEqual({ type: 'urn:bellpull:problem:not-signed-in' })
  })

  it('cannot be had by polling', async () => {
    const { socket } = listen(person.token, { transports: ['polling'] })
    await refusal(socket)
    expect(socket.connected).toBe(false)
  })

  it('hears every delta, what changed in stock, and notices, in order', async () => {
    const { heard } = await connected(person.token)
    publisher().delta(delta(7))
    publisher().stockChanged(['i'])
    publisher().notice({ kind: 'case.changed', caseId: 'k' })
    publisher().delta(delta(8))
    await vi.waitFor(() => expect(heard).toHaveLength(4), TIMEOUT)
    expect(heard).toEqual([
      ['board:delta', delta(7)],
      ['stock:changed', { catalogueItemIds: ['i'] }],
      ['notice', { kind: 'case.changed', caseId: 'k' }],
      ['board:delta', delta(8)],
    ])
  })

  it('hears deltas in order when they were made known in another', async () => {
    const { heard } = await connected(person.token)
    for (const revision of [10, 12, 11]) publisher().delta(delta(revision))
    await vi.waitFor(() => expect(heard).toHaveLength(3), TIMEOUT)
    expect(heard.map(([, message]) => message)).toEqual([10, 11, 12].map(delta))
  })

  it('that sends anything is closed', async () => {
    const { socket } = await connected(person.token)
    const other = await connected(person.token)
    socket.emit('board:delta', delta(9))
    await vi.waitFor(() => expect(socket.connected).toBe(false), TIMEOUT)
    expect(other.heard).toEqual([])
    expect(other.socket.connected).toBe(true)
  })

  it('is told when its session ends, and closed; others stay', async () => {
    const leaver = await api.signInAs('scrub', 'Early Leaver')
    const { socket, heard } = await connected(leaver.token)
    const other = await connected(person.token)
    await api.house.sessions.signOut(leaver.sessionId)
    await vi.waitFor(() => expect(socket.connected).toBe(false), TIMEOUT)
    expect(heard).toEqual([['session:ended', undefined]])
    expect(other.socket.connected).toBe(true)
    expect((await refusal(listen(leaver.token).socket)).data).toEqual({
      type: 'urn:bellpull:problem:not-signed-in',
    })
  })

  it('is closed when its session was ended elsewhere, or its person disabled', async () => {
    const gone = await api.signInAs('core', 'Disabled Colleague')
    const { socket, heard } = await connected(gone.token)
    await api.rows('UPDATE person SET active = false WHERE id = $1', [gone.id])
    await vi.waitFor(() => expect(socket.connected).toBe(false), TIMEOUT)
    expect(heard).toEqual([['session:ended', undefined]])
  })

  it('outlives its access token', async () => {
    const staying = await api.signInAs('charge', 'Long Shift')
    const { socket, heard } = await connected(staying.token)
    api.clock.forward(20 * 60_000)
    await api.as(staying).get('/me').expect(401)
    const looks = vi.spyOn(api.house.live, 'living')
    await vi.waitFor(() => expect(looks).toHaveBeenCalled(), TIMEOUT)
    await looks.mock.results[0]!.value
    looks.mockRestore()
    publisher().delta(delta(13))
    await vi.waitFor(() => expect(heard).toHaveLength(1), TIMEOUT)
    expect(socket.connected).toBe(true)
    person = await api.signInAs('circulator')
  })

  it('that does not read is cut off, and the others hear everything', async () => {
    const url = new URL(api.url)
    const deaf = connectTcp(Number(url.port), url.hostname)
    const key = Buffer.from('sixteen bytes ok').toString('base64')
    deaf.write(
      `GET /socket.io/?EIO=4&transport=websocket HTTP/1.1\r\nHost: ${url.host}\r\nUpgrade: websocket\r\n` +
        `Connection: Upgrade\r\nSec-WebSocket-Key: ${key}\r\nSec-WebSocket-Version: 13\r\n\r\n`,
    )
    const upgraded = new Promise((resolve) => deaf.once('data', resolve))
    await upgraded
    // A masked text frame: CONNECT with the token, in Socket.IO's protocol.
    const text = Buffer.from(`40${JSON.stringify({ token: person.token })}`)
    const head = Buffer.from([0x81, 0x80 | 126, text.length >> 8, text.length & 255, 0, 0, 0, 0])
    deaf.write(Buffer.concat([head, text]))
    await new Promise((resolve) => deaf.once('data', resolve))
    deaf.pause()

    const { heard } = await connected(person.token)
    const before = api.house.socketCount()
    const large = { ...delta(11), call: { id: 'c', text: 'x'.repeat(1 << 20) } }
    let sent = 0
    await vi.waitFor(
      () => {
        publisher().delta(large)
        sent += 1
        expect(api.house.socketCount()).toBe(before - 1)
      },
      { timeout: 15_000, interval: 50 },
    )
    await vi.waitFor(() => expect(heard).toHaveLength(sent), TIMEOUT)
    deaf.destroy()
  })
})
