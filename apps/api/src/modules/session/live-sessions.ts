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

/** Older than this, what was read is still believed, but all that is in use is read again meanwhile; in milliseconds. */
const READ_AGAIN_MS = 1_000

/** A session that nobody used for so long is read again only when somebody does; in milliseconds. */
const IN_USE_MS = 5 * 60_000

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
  usedAtMs: number
}

const LIVING = `
SELECT s.id AS session_id, s.expires_at, p.id, p.name, p.initials, p.role
  FROM session s JOIN person p ON p.id = s.person_id
 WHERE s.id = ANY($1::uuid[]) AND s.ended_at IS NULL AND s.expires_at > $2 AND p.active`

/**
 * Who is behind a token. Nearly every request asks, so nearly every answer comes from memory, and memory is kept
 * true by one statement for all sessions rather than by one for each.
 */
export class LiveSessions implements Sessions {
  readonly #known = new Map<string, Entry>()
  readonly #reading = new Map<string, Promise<Entry | null>>()
  #readingAgain = false
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
    entry.usedAtMs = now
    const ageMs = now - entry.readAtMs
    if (ageMs >= READ_AGAIN_MS) this.#readAgain(now)
    if (entry.expiresAtMs > now && ageMs < BELIEVED_MS) return entry
    this.#known.delete(sessionId)
    return undefined
  }

  /** Reads all that is in use, behind the requests' backs. What fails here is asked for again by who needs it. */
  #readAgain(now: number): void {
    if (this.#readingAgain) return
    for (const [id, entry] of this.#known) if (now - entry.usedAtMs > IN_USE_MS) this.#known.delete(id)
    this.#readingAgain = true
    this.#ask([...this.#known.keys()])
      .catch(() => undefined)
      .finally(() => {
        this.#readingAgain = false
      })
  }

  /** One question at a time for one session, however many requests wait for the answer. */
  #read(sessionId: string): Promise<Entry | null> {
    const running = this.#reading.get(sessionId)
    if (running) return running
    const reading = this.#ask([sessionId])
      .then(() => this.#known.get(sessionId) ?? null)
      .finally(() => this.#reading.delete(sessionId))
    this.#reading.set(sessionId, reading)
    return reading
  }

  /** Reads sessions into memory; those that no longer live are forgotten. */
  async #ask(sessionIds: string[]): Promise<void> {
    const now = this.clock.now()
    const { rows } = await this.database.query<Row>({
      name: 'living-sessions',
      text: LIVING,
      values: [sessionIds, now],
    })
    const living = new Map(rows.map((row) => [row.session_id, row]))
    for (const sessionId of sessionIds) {
      const known = this.#known.get(sessionId)
      // Somebody else asked later and was answered sooner: that is the newer truth.
      if (known && known.readAtMs > now.getTime()) continue
      const row = living.get(sessionId)
      if (!row || this.#ended.has(sessionId)) {
        this.#known.delete(sessionId)
        continue
      }
      this.#known.set(sessionId, {
        actor: { id: row.id, name: row.name, initials: row.initials, role: row.role, sessionId },
        expiresAtMs: row.expires_at.getTime(),
        readAtMs: now.getTime(),
        usedAtMs: known?.usedAtMs ?? now.getTime(),
      })
    }
  }
}
