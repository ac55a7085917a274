import { createSecretKey, type KeyObject } from 'node:crypto'
import jwt from 'jsonwebtoken'
import { z } from 'zod'
import type { Clock } from '../../platform/clock.js'
import { Problem } from '../../platform/http/problem.js'

/** How long an access token is good for, in seconds. */
export const ACCESS_TOKEN_S = 15 * 60

const ISSUER = 'bellpull'
const payload = z.object({ sub: z.uuid(), sid: z.uuid(), exp: z.int() })

/** How many tokens are remembered as good, so that each is verified once and not at every request. */
const REMEMBERED = 5_000

interface ReadToken {
  readonly personId: string
  readonly sessionId: string
  readonly expiresAtS: number
}

/** Short-lived tokens that name a person and a session; whether that session still lives is asked each time. */
export class AccessTokens {
  readonly #verified = new Map<string, ReadToken>()

  /** Made once: from a text, the library would make it anew for every token, after a try to read it as a public key. */
  readonly #secret: KeyObject

  constructor(
    secret: string,
    private readonly clock: Clock,
  ) {
    this.#secret = createSecretKey(Buffer.from(secret))
  }

  issue(personId: string, sessionId: string): string {
    const iat = this.#nowS()
    return jwt.sign(
      { sub: personId, sid: sessionId, iss: ISSUER, iat, exp: iat + ACCESS_TOKEN_S },
      this.#secret,
      {
        algorithm: 'HS256',
      },
    )
  }

  /** @throws {Problem} `not-signed-in` */
  read(token: string): { personId: string; sessionId: string } {
    const known = this.#verified.get(token)
    if (known) {
      if (known.expiresAtS > this.#nowS()) return known
      this.#verified.delete(token)
    }
    const read = this.#verify(token)
    if (this.#verified.size >= REMEMBERED) this.#verified.clear()
    this.#verified.set(token, read)
    return read
  }

  #verify(token: string): ReadToken {
    try {
      const read = jwt.verify(token, this.#secret, {
        algorithms: ['HS256'],
        issuer: ISSUER,
        clockTimestamp: this.#nowS(),
      })
      const { sub, sid, exp } = payload.parse(read)
      return { personId: sub, sessionId: sid, expiresAtS: exp }
    } catch (cause) {
      throw new Problem('not-signed-in', { cause })
    }
  }

  #nowS(): number {
    return Math.floor(this.clock.now().getTime() / 1000)
  }
}
