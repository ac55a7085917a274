import type { Role } from '@bellpull/domain'
import type { Clock } from '../../platform/clock.js'
import type { Database } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'
import type { Actor } from '../../platform/http/session.js'
import type { LiveSessions as Sessions } from '../../platform/realtime/socket-server.js'
import type { AccessTokens } from './access-token.js'

/**
 * How long what was read about a session is believed, in milliseconds. A session ended in this process is refused
 * from that moment; one ended elsewhere (another process, a disabled person) after this at the latest.
 */
export const BELIEVED_MS = 2_000

interface Row {
  readonly session_id: string
  readonly id: string
  readonly name: string
  readonly initials: string
  readonly role: Role
  readonly expires_at: Date
}

interface Entry {
  readonly actor: Actor
  readonly expiresAtMs: number
  readonly readAtMs: number
}

const LIVING = `
SELECT s.id AS session_id, s.expires_at, p.id, p.name, p.initials, p.role
  FROM session s JOIN person p ON p.id = s.person_id
 WHERE s.id = ANY($1::uuid[]) AND s.ended_at IS NULL AND s.expires_at > $2 AND p.active`

/** Who is behind a token. Nearly every request asks, so nearly every answer comes from memory. */
export class LiveSessions implements Sessions {
  readonly #known = new Map<string, Entry>()
  readonly #reading = new Map<string, Promise<Entry | null>>()
  /** Ended here a moment ago: an answer that was on its way then must not bring them back. */
  readonly #ended = new Map<string, number>()

  constructor(
    private readonly database: Database,
    private readonly tokens: AccessTokens,
    private readonly clock: Clock,
  ) {}

  async authenticate(token: string): Promise<Actor> {
    const { personId, sessionId } = this.tokens.read(token)
    const entry = this.#fresh(sessionId) ?? (await this.#read(sessionId))
    if (!entry || entry.actor.id !== personId || this.#ended.has(sessionId))
      throw new Problem('not-signed-in')
    return entry.actor
  }

  async living(sessionIds: string[]): Promise<Set<string>> {
    const { rows } = await this.database.query<Row>({
      name: 'living-sessions',
      text: LIVING,
      values: [sessionIds, this.clock.now()],
    })
    return new Set(rows.map((row) => row.session_id))
  }

  /** From now on this session is refused in this process, whatever is still on its way. */
  forget(sessionId: string): void {
    const now = this.clock.now().getTime()
    for (const [id, at] of this.#ended) if (at < now - 60_000) this.#ended.delete(id)
    this.#ended.set(sessionId, now)
    this.#known.delete(sessionId)
  }

  #fresh(sessionId: string): Entry | undefined {
    const now = this.clock.now().getTime()
    const entry = this.#known.get(sessionId)
    if (!entry) return undefined
    if (entry.expiresAtMs > now && now - entry.readAtMs < BELIEVED_MS) return entry
    this.#known.delete(sessionId)
    return undefined
  }

  /** One question at a time for one session, however many requests wait for the answer. */
  #read(sessionId: string): Promise<Entry | null> {
    const running = this.#reading.get(sessionId)
    if (running) return running
    const reading = this.#ask(sessionId).finally(() => this.#reading.delete(sessionId))
    this.#reading.set(sessionId, reading)
    return reading
  }

  async #ask(sessionId: string): Promise<Entry | null> {
    const now = this.clock.now()
    const { rows } = await this.database.query<Row>({
      name: 'living-sessions',
      text: LIVING,
      values: [[sessionId], now],
    })
    const row = rows[0]
    if (!row || this.#ended.has(sessionId)) return null
    const entry: Entry = {
      actor: { id: row.id, name: row.name, initials: row.initials, role: row.role, sessionId },
      expiresAtMs: row.expires_at.getTime(),
      readAtMs: now.getTime(),
    }
    this.#known.set(sessionId, entry)
    return entry
  }
}
