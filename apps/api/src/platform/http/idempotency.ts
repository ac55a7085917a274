import { createHash } from 'node:crypto'
import type { Request, RequestHandler, Response } from 'express'
import { z } from 'zod'
import type { Clock } from '../clock.js'
import type { Database, Sql } from '../db/sql.js'
import { Problem } from './problem.js'
import { actorOf } from './session.js'

/** How long a key stands for its first request, in milliseconds. */
export const KEY_LIVES_MS = 24 * 3_600_000

/** A request that has no answer after this long died with its process: the key is free again. */
const RUNNING_AT_MOST_MS = 60_000

/** Stored in place of a status while the first request is running. */
const RUNNING = 0

const uuid = z.uuid()

/** Whose key it is, and for what. */
export interface KeyUse {
  readonly personId: string
  readonly method: string
  readonly path: string
  readonly key: string
  readonly requestHash: Buffer
}

export interface StoredAnswer {
  readonly status: number
  /** JSON, as it was sent. */
  readonly answer: string
}

/**
 * The `Idempotency-Key` header.
 *
 * @throws {Problem} `idempotency-key-missing` when it is required and not there, `invalid-input` when it is no UUID.
 */
export function readIdempotencyKey(req: Request, options: { required: true }): string
export function readIdempotencyKey(req: Request, options: { required: boolean }): string | null
export function readIdempotencyKey(req: Request, options: { required: boolean }): string | null {
  const given = req.get('idempotency-key')
  if (given === undefined || given === '') {
    if (options.required) throw new Problem('idempotency-key-missing')
    return null
  }
  const key = uuid.safeParse(given)
  if (!key.success)
    throw new Problem('invalid-input', {
      detail: 'The Idempotency-Key header must be an id (UUID).',
      errors: [],
    })
  return key.data.toLowerCase()
}

/** SHA-256 of what was sent, whatever the order of its members. */
export const requestHash = (req: Request): Buffer => createHash('sha256').update(canonical(req.body)).digest()

function canonical(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(canonical).join(',')}]`
  if (typeof value !== 'object' || value === null) return JSON.stringify(value) ?? ''
  const members = Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1))
  return `{${members.map(([name, member]) => `${JSON.stringify(name)}:${canonical(member)}`).join(',')}}`
}

/** The key of a request, with everything that it stands for, or `null` when it carries none. */
export function keyUseOf(req: Request, options: { required: true }): KeyUse
export function keyUseOf(req: Request, options: { required: boolean }): KeyUse | null
export function keyUseOf(req: Request, options: { required: boolean }): KeyUse | null {
  const key = readIdempotencyKey(req, options)
  if (key === null) return null
  return {
    personId: actorOf(req).id,
    method: req.method,
    path: req.baseUrl + req.path,
    key,
    requestHash: requestHash(req),
  }
}

/**
 * For work in a transaction of its own: the answer of the first request with this key, or `null` when this is the
 * first. Until the transaction ends nobody else gets past this with the same key.
 *
 * @throws {Problem} `in-progress` while the first is still running, `idempotency-key-reused` when its body differs.
 */
export async function storedAnswer(sql: Sql, use: KeyUse, now: Date): Promise<StoredAnswer | null> {
  const lock = await sql.query<{ mine: boolean }>({
    text: 'SELECT pg_try_advisory_xact_lock(hashtextextended($1, 8420)) AS mine',
    values: [[use.personId, use.key, use.method, use.path].join(' ')],
  })
  if (!lock.rows[0]?.mine) throw new Problem('in-progress')
  const found = await sql.query<StoredAnswer & { request_hash: Buffer }>({
    text: `SELECT request_hash, status, answer FROM idempotency_key
            WHERE person_id = $1 AND key = $2 AND method = $3 AND path = $4 AND created_at > $5`,
    values: [...scope(use), new Date(now.getTime() - KEY_LIVES_MS)],
  })
  const first = found.rows[0]
  if (!first) return null
  if (!first.request_hash.equals(use.requestHash)) throw new Problem('idempotency-key-reused')
  return { status: first.status, answer: first.answer }
}

/** Keeps a success under its key; part of the transaction that made it. A key older than a day is taken anew. */
export async function storeAnswer(sql: Sql, use: KeyUse, stored: StoredAnswer, now: Date): Promise<void> {
  await sql.query({
    text: `INSERT INTO idempotency_key (person_id, key, method, path, request_hash, status, answer, created_at)
           VALUES ($1, $2, $3, $4, $5, $6, $7, $8)
           ON CONFLICT (person_id, key, method, path) DO UPDATE
             SET request_hash = excluded.request_hash, status = excluded.status,
                 answer = excluded.answer, created_at = excluded.created_at`,
    values: [...scope(use), use.requestHash, stored.status, stored.answer, now],
  })
}

const scope = (use: KeyUse): string[] => [use.personId, use.key, use.method, use.path]

/** Sends an answer that was made, or stored, as text. */
export function sendStored(res: Response, stored: StoredAnswer): void {
  res.status(stored.status).type('application/json').send(stored.answer)
}

/**
 * For routes whose work is not one transaction: a key is welcome. The first request leaves a mark, its success is
 * stored before it is sent, its refusal takes the mark away, so that it is evaluated again.
 */
export function idempotent(database: Database, clock: Clock): RequestHandler {
  return async (req, res, next) => {
    const use = keyUseOf(req, { required: false })
    if (use === null) {
      next()
      return
    }
    if (!(await takeKey(database, use, clock.now()))) {
      sendStored(res, await answerOfFirst(database, use))
      return
    }
    storeBeforeSending(res, database, use, clock)
    next()
  }
}

async function takeKey(database: Database, use: KeyUse, now: Date): Promise<boolean> {
  const taken = await database.query({
    text: `INSERT INTO idempotency_key (person_id, key, method, path, request_hash, status, answer, created_at)
           VALUES ($1, $2, $3, $4, $5, ${RUNNING}, '', $6)
           ON CONFLICT (person_id, key, method, path) DO UPDATE
             SET request_hash = excluded.request_hash, status = ${RUNNING}, answer = '', created_at = excluded.created_at
             WHERE idempotency_key.created_at <= $7
                OR (idempotency_key.status = ${RUNNING} AND idempotency_key.created_at <= $8)`,
    values: [
      ...scope(use),
      use.requestHash,
      now,
      new Date(now.getTime() - KEY_LIVES_MS),
      new Date(now.getTime() - RUNNING_AT_MOST_MS),
    ],
  })
  return taken.rowCount === 1
}

async function answerOfFirst(database: Database, use: KeyUse): Promise<StoredAnswer> {
  const found = await database.query<StoredAnswer & { request_hash: Buffer }>({
    text: `SELECT request_hash, status, answer FROM idempotency_key
            WHERE person_id = $1 AND key = $2 AND method = $3 AND path = $4`,
    values: scope(use),
  })
  const first = found.rows[0]
  // Refused and taken away between the two statements: this client may simply ask again.
  if (!first) throw new Problem('in-progress')
  if (!first.request_hash.equals(use.requestHash)) throw new Problem('idempotency-key-reused')
  if (first.status === RUNNING) throw new Problem('in-progress')
  return { status: first.status, answer: first.answer }
}

function storeBeforeSending(res: Response, database: Database, use: KeyUse, clock: Clock): void {
  const send = res.send.bind(res)
  res.send = (body?: unknown) => {
    res.send = send
    const text = typeof body === 'string' ? body : body === undefined ? '' : JSON.stringify(body)
    const kept =
      res.statusCode < 400
        ? storeAnswer(database, use, { status: res.statusCode, answer: text }, clock.now())
        : database.query({
            text: `DELETE FROM idempotency_key
                    WHERE person_id = $1 AND key = $2 AND method = $3 AND path = $4 AND status = ${RUNNING}`,
            values: scope(use),
          })
    // An answer that could not be kept is still the answer; the mark goes stale and the key is free again.
    const sendIt = (): void => {
      send(text)
    }
    kept.then(sendIt, sendIt)
    return res
  }
}
