import { may, type Permission, type Role } from '@bellpull/domain'
import type { Request, RequestHandler } from 'express'
import { Problem } from './problem.js'

/** Who is asking. */
export interface Actor {
  readonly id: string
  readonly name: string
  readonly initials: string
  readonly role: Role
  readonly sessionId: string
}

/** Finds the person behind an access token, while their session lives. */
export interface Authenticator {
  /** @throws {Problem} `not-signed-in` when the token is no good, or its session has ended. */
  authenticate(token: string): Promise<Actor>
}

const actors = new WeakMap<Request, Actor>()

/** The person who is signed in. @throws {Problem} `not-signed-in` */
export function actorOf(req: Request): Actor {
  const actor = actors.get(req)
  if (!actor) throw new Problem('not-signed-in')
  return actor
}

/** The access token of a request, or `null`. */
export function bearerToken(req: Request): string | null {
  const match = /^Bearer +([\w.~+/-]+=*) *$/i.exec(req.headers.authorization ?? '')
  return match?.[1] ?? null
}

/** Lets nobody past who is not signed in. Stands before the body is read. */
export function authenticate(sessions: Authenticator): RequestHandler {
  return async (req, _res, next) => {
    const token = bearerToken(req)
    if (token === null) throw new Problem('not-signed-in')
    actors.set(req, await sessions.authenticate(token))
    next()
  }
}

/** Lets only roles past that may do this. Stands before the body is validated. */
export function permit(permission: Permission): RequestHandler {
  return (req, _res, next) => {
    demand(actorOf(req), permission)
    next()
  }
}

/** @throws {Problem} `not-permitted` unless the actor's role may do this. */
export function demand(actor: Actor, permission: Permission): void {
  if (!may(actor.role, permission)) throw new Problem('not-permitted')
}
