import { createHash, randomBytes, randomUUID } from 'node:crypto'
import type { SessionView, SignIn } from '@bellpull/contracts'
import type { Role } from '@bellpull/domain'
import type { Clock } from '../../platform/clock.js'
import type { Database, Sql } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'
import type { Publisher } from '../../platform/realtime/publisher.js'
import { ACCESS_TOKEN_S, type AccessTokens } from './access-token.js'
import { Attempts, SIGN_IN_LIMITS } from './attempts.js'
import type { LiveSessions } from './live-sessions.js'
import { hashPassword, matchesPassword } from './password.js'

/** Unused for this long, a session is over; and after this long whatever happens. In milliseconds. */
export const IDLE_MS = 12 * 3_600_000
export const LONGEST_MS = 24 * 3_600_000

/** Two tabs may send the same refresh token within this time, in milliseconds; later it is stolen goods. */
export const GRACE_MS = 30_000

export interface SignedIn {
  readonly view: SessionView
  readonly refreshToken: string
  readonly refreshExpiresAt: Date
}

interface PersonRow {
  readonly id: string
  readonly name: string
  readonly initials: string
  readonly role: Role
}

interface TokenRow extends PersonRow {
  readonly session_id: string
  readonly used_at: Date | null
  readonly token_expires_at: Date
  readonly created_at: Date
  readonly expires_at: Date
  readonly ended_at: Date | null
  readonly active: boolean
}

const hashOf = (token: string): Buffer => createHash('sha256').update(token).digest()

/** Signing in, staying signed in, and signing out. */
export class SessionService {
  readonly #attempts: Attempts
  /** Compared with when there is no such account, so that it takes as long as when there is. */
  readonly #nobody = hashPassword(randomUUID())

  constructor(
    private readonly database: Database,
    private readonly clock: Clock,
    private readonly tokens: AccessTokens,
    private readonly live: LiveSessions,
    private readonly publisher: Publisher,
  ) {
    this.#attempts = new Attempts(database, clock, SIGN_IN_LIMITS)
  }

  /**
   * @param address where the attempt comes from; failures are counted by account and address.
   * @throws {Problem} `wrong-credentials`, in the same words and time whether the account exists or not;
   *   `too-many-attempts`.
   */
  async signIn(credentials: SignIn, address: string): Promise<SignedIn> {
    const email = credentials.email.normalize('NFKC').toLowerCase()
    const succeeded = await this.#attempts.begin(email, address)
    const { rows } = await this.database.query<PersonRow & { password_hash: string | null }>({
      text: 'SELECT id, name, initials, role, password_hash FROM person WHERE email = $1 AND active',
      values: [email],
    })
    const person = rows[0]
    const matches = await matchesPassword(credentials.password, person?.password_hash ?? (await this.#nobody))
    if (!person?.password_hash || !matches) throw new Problem('wrong-credentials')
    await succeeded()
    return await this.#open(person)
  }

  /**
   * Exchanges a refresh token for a new one. A token that comes again later than the grace allows was copied:
   * the whole family ends.
   *
   * @throws {Problem} `not-signed-in`
   */
  async refresh(token: string): Promise<SignedIn> {
    const now = this.clock.now()
    const done = await this.database.transaction(
      async (sql): Promise<SignedIn | { ended: string } | null> => {
        const found = await this.#find(sql, token)
        if (!found?.active || found.ended_at || found.expires_at <= now || found.token_expires_at <= now)
          return null
        if (found.used_at && now.getTime() - found.used_at.getTime() > GRACE_MS) {
          await end(sql, found.session_id, 'refresh token used again', now)
          return { ended: found.session_id }
        }
        const last = new Date(found.created_at.getTime() + LONGEST_MS)
        const expiresAt = new Date(Math.min(now.getTime() + IDLE_MS, last.getTime()))
        await sql.query({
          text: 'UPDATE refresh_token SET used_at = coalesce(used_at, $2) WHERE token_hash = $1',
          values: [hashOf(token), now],
        })
        await sql.query({
          text: 'UPDATE session SET last_seen_at = $2, expires_at = $3 WHERE id = $1',
          values: [found.session_id, now, expiresAt],
        })
        return await this.#issue(sql, found, found.session_id, expiresAt)
      },
    )
    if (done && 'view' in done) return done
    if (done) this.#tell(done.ended)
    throw new Problem('not-signed-in')
  }

  /** Ends a session at once, here and everywhere. Ending it twice is harmless. */
  async signOut(sessionId: string): Promise<void> {
    await end(this.database, sessionId, 'signed out', this.clock.now())
    this.#tell(sessionId)
  }

  /** Ends the session that a refresh token belongs to. @returns whether there was one. */
  async signOutByRefreshToken(token: string): Promise<boolean> {
    const { rows } = await this.database.query<{ session_id: string }>({
      text: 'SELECT session_id FROM refresh_token WHERE token_hash = $1',
      values: [hashOf(token)],
    })
    const sessionId = rows[0]?.session_id
    if (sessionId === undefined) return false
    await this.signOut(sessionId)
    return true
  }

  /** Ends every session of a person: they were disabled, or their password was changed. */
  async endSessionsOf(personId: string, because: string): Promise<void> {
    const { rows } = await this.database.query<{ id: string }>({
      text: `UPDATE session SET ended_at = $2, ended_because = $3
              WHERE person_id = $1 AND ended_at IS NULL RETURNING id`,
      values: [personId, this.clock.now(), because],
    })
    for (const { id } of rows) this.#tell(id)
  }

  #tell(sessionId: string): void {
    this.live.forget(sessionId)
    this.publisher.sessionEnded(sessionId)
  }

  async #open(person: PersonRow): Promise<SignedIn> {
    const now = this.clock.now()
    const sessionId = randomUUID()
    const expiresAt = new Date(now.getTime() + IDLE_MS)
    return await this.database.transaction(async (sql) => {
      await sql.query({
        text: `INSERT INTO session (id, person_id, created_at, last_seen_at, expires_at) VALUES ($1, $2, $3, $3, $4)`,
        values: [sessionId, person.id, now, expiresAt],
      })
      return await this.#issue(sql, person, sessionId, expiresAt)
    })
  }

  async #issue(sql: Sql, person: PersonRow, sessionId: string, expiresAt: Date): Promise<SignedIn> {
    const refreshToken = randomBytes(32).toString('base64url')
    await sql.query({
      text: `INSERT INTO refresh_token (token_hash, session_id, issued_at, expires_at) VALUES ($1, $2, $3, $4)`,
      values: [hashOf(refreshToken), sessionId, this.clock.now(), expiresAt],
    })
    const { id, name, initials, role } = person
    return {
      view: {
        accessToken: this.tokens.issue(id, sessionId),
        expiresInS: ACCESS_TOKEN_S,
        user: { id, name, initials, role },
      },
      refreshToken,
      refreshExpiresAt: expiresAt,
    }
  }

  /** The token and its session. Two tabs that ask at once both find it unused, as the grace would let them. */
  async #find(sql: Sql, token: string): Promise<TokenRow | undefined> {
    const { rows } = await sql.query<TokenRow>({
      text: `SELECT t.session_id, t.used_at, t.expires_at AS token_expires_at, s.created_at, s.expires_at, s.ended_at,
                    p.id, p.name, p.initials, p.role, p.active
               FROM refresh_token t
               JOIN session s ON s.id = t.session_id
               JOIN person p ON p.id = s.person_id
              WHERE t.token_hash = $1`,
      values: [hashOf(token)],
    })
    return rows[0]
  }
}

async function end(sql: Sql, sessionId: string, because: string, now: Date): Promise<void> {
  await sql.query({
    text: 'UPDATE session SET ended_at = $2, ended_because = $3 WHERE id = $1 AND ended_at IS NULL',
    values: [sessionId, now, because],
  })
}
