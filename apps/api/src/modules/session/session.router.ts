import { signIn, type SignInOptions } from '@bellpull/contracts'
import cookieParser from 'cookie-parser'
import { Router, type Request, type RequestHandler, type Response } from 'express'
import { parse } from '../../platform/http/parse.js'
import { Problem } from '../../platform/http/problem.js'
import { bearerToken } from '../../platform/http/session.js'
import type { LiveSessions } from './live-sessions.js'
import type { SessionService, SignedIn } from './session.service.js'
import type { SignInOptionsService } from './sign-in-options.service.js'

export interface SessionRouterDeps {
  readonly sessions: SessionService
  readonly live: LiveSessions
  readonly options: SignInOptionsService
  /** Reads a JSON body. */
  readonly readBody: RequestHandler
}

export const REFRESH_COOKIE = 'bellpull_refresh'
const COOKIE_PATH = '/api/v1/session'

/** The only routes that answer somebody who is not signed in. An Idempotency-Key is ignored here. */
export function sessionRouter({ sessions, live, options, readBody }: SessionRouterDeps): Router {
  const router = Router()
  router.use(cookieParser())
  router.use((_req, res, next) => {
    res.setHeader('Cache-Control', 'no-store')
    next()
  })

  router.get('/options', async (_req, res) => {
    res.json((await options.get()) satisfies SignInOptions)
  })

  router.post('/', readBody, async (req, res) => {
    const credentials = parse(signIn, req.body, 'body')
    answer(req, res, await sessions.signIn(credentials, req.ip ?? 'unknown'))
  })

  router.post('/refresh', async (req, res) => {
    const token = refreshToken(req)
    if (token === null) throw new Problem('not-signed-in')
    try {
      answer(req, res, await sessions.refresh(token))
    } catch (error) {
      if (error instanceof Problem) res.clearCookie(REFRESH_COOKIE, { path: COOKIE_PATH })
      throw error
    }
  })

  // Either token names the session: an access token that ran out must not keep anybody signed in.
  router.delete('/', async (req, res) => {
    if (!(await endByAccessToken(req)) && !(await endByRefreshToken(req))) throw new Problem('not-signed-in')
    res.clearCookie(REFRESH_COOKIE, { path: COOKIE_PATH })
    res.status(204).end()
  })

  async function endByAccessToken(req: Request): Promise<boolean> {
    const token = bearerToken(req)
    if (token === null) return false
    try {
      await sessions.signOut((await live.authenticate(token)).sessionId)
      return true
    } catch (error) {
      if (error instanceof Problem && error.code === 'not-signed-in') return false
      throw error
    }
  }

  async function endByRefreshToken(req: Request): Promise<boolean> {
    const token = refreshToken(req)
    return token !== null && (await sessions.signOutByRefreshToken(token))
  }

  return router
}

function refreshToken(req: Request): string | null {
  const token = (req.cookies as Record<string, unknown>)[REFRESH_COOKIE]
  return typeof token === 'string' && token !== '' ? token : null
}

function answer(req: Request, res: Response, signedIn: SignedIn): void {
  res.cookie(REFRESH_COOKIE, signedIn.refreshToken, {
    httpOnly: true,
    sameSite: 'strict',
    secure: req.secure,
    path: COOKIE_PATH,
    expires: signedIn.refreshExpiresAt,
  })
  res.json(signedIn.view)
}
