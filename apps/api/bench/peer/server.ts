import { createHash, randomUUID } from 'node:crypto'
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http'
import pg from 'pg'
import { WebSocketServer, type WebSocket } from 'ws'
import { answer } from '../child.js'
import { PEER_CALL } from './schema.js'

/**
 * The yardstick: the same work with as little as possible around it. Node's own HTTP server, one prepared statement
 * a call, plain WebSockets. It knows one route, trusts what it is sent, and keeps its sessions in memory.
 */

interface Line {
  readonly catalogueItemId: string
  readonly quantity: number
}
interface Body {
  readonly kind: string
  readonly neededInMinutes: number | null
  readonly calledBy: string
  readonly items: readonly Line[]
}
interface Setup {
  readonly databaseUrl: string
  readonly databaseOptions: string
  readonly poolSize: number
  readonly people: ReadonlyMap<string, string>
}

const UNIQUE_VIOLATION = '23505'
const CALLS = /^\/api\/v1\/cases\/([0-9a-f-]{36})\/calls$/

async function start({ databaseUrl, databaseOptions, poolSize, people }: Setup): Promise<number> {
  const pool = new pg.Pool({ connectionString: databaseUrl, max: poolSize, options: databaseOptions })
  pool.on('error', () => undefined)
  const listeners = new Set<WebSocket>()

  async function call(personId: string, key: string, caseId: string, raw: Buffer): Promise<[number, string]> {
    const body = JSON.parse(raw.toString()) as Body
    const hash = createHash('sha256').update(raw).digest()
    const now = new Date()
    const neededAt =
      body.neededInMinutes === null ? null : new Date(now.getTime() + body.neededInMinutes * 60_000)
    const products = body.items.flatMap((line) => Array<string>(line.quantity).fill(line.catalogueItemId))
    try {
      const { rows } = await pool.query<{ roomId: string; revision: number; body: string }>({
        name: 'call',
        text: PEER_CALL,
        values: [
          personId,
          key,
          hash,
          now,
          caseId,
          randomUUID(),
          body.kind,
          neededAt,
          body.calledBy,
          products.map(() => randomUUID()),
          products,
        ],
      })
      const made = rows[0]
      if (!made) return [409, '{"code":"none-free"}']
      const { roomId, revision } = made
      // One text for everybody, encoded once.
      const event = Buffer.from(
        `{"roomId":"${roomId}","revision":${revision},"event":"call.called","call":${made.body}}`,
      )
      for (const listener of listeners) listener.send(event, { binary: false })
      return [201, made.body]
    } catch (error) {
      if (!(error instanceof pg.DatabaseError) || error.code !== UNIQUE_VIOLATION) throw error
      const { rows } = await pool.query<{ answer: string; request_hash: Buffer }>({
        name: 'answer',
        text: 'SELECT answer, request_hash FROM idempotency_key WHERE person_id = $1 AND key = $2',
        values: [personId, key],
      })
      if (!rows[0]) throw error
      return rows[0].request_hash.equals(hash)
        ? [201, rows[0].answer]
        : [422, '{"code":"idempotency-key-reused"}']
    }
  }

  function serve(req: IncomingMessage, res: ServerResponse): void {
    const send = (status: number, text: string): void => {
      res.writeHead(status, { 'Content-Type': 'application/json', 'Content-Length': Buffer.byteLength(text) })
      res.end(text)
    }
    const personId = people.get(req.headers.authorization?.slice('Bearer '.length) ?? '')
    if (personId === undefined) return send(401, '{"code":"not-signed-in"}')
    const caseId = req.method === 'POST' ? CALLS.exec(req.url ?? '')?.[1] : undefined
    const key = req.headers['idempotency-key']
    if (caseId === undefined || typeof key !== 'string') return send(404, '{"code":"not-found"}')
    const chunks: Buffer[] = []
    req.on('data', (chunk: Buffer) => chunks.push(chunk))
    req.on('end', () => {
      call(personId, key, caseId, Buffer.concat(chunks)).then(
        ([status, text]) => send(status, text),
        () => send(503, '{"code":"unavailable"}'),
      )
    })
  }

  const http = createServer(serve)
  const sockets = new WebSocketServer({ noServer: true, perMessageDeflate: false })
  http.on('upgrade', (req, socket, head) => {
    const token = new URL(req.url ?? '/', 'ws://peer').searchParams.get('token') ?? ''
    if (!people.has(token)) {
      socket.destroy()
      return
    }
    sockets.handleUpgrade(req, socket, head, (listener) => {
      listeners.add(listener)
      listener.on('close', () => listeners.delete(listener))
    })
  })
  return await new Promise((resolve) => {
    http.listen(0, '127.0.0.1', () => {
      const address = http.address()
      resolve(typeof address === 'object' && address ? address.port : 0)
    })
  })
}

answer({ start })
