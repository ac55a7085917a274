import { meView, sessionView, signInOptions, type SignIn } from '@bellpull/contracts'
import { http } from './http'

export const sessionApi = {
  /** @throws {ApiProblem} `wrong-credentials`, `too-many-attempts` (with `retryAfterS`). */
  signIn: (credentials: SignIn) => http.post('/session', sessionView, { body: credentials, anonymous: true }),
  /** Ends the session that the token or the cookie names. @throws {ApiProblem} `not-signed-in` where there is none. */
  signOut: () => http.send('DELETE', '/session', { deadlineMs: 4_000 }),
  restore: () => http.restore(),
  me: () => http.get('/me', meView),
  options: () => http.get('/session/options', signInOptions, { anonymous: true }),
}
