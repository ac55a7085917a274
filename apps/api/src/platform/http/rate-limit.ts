import type { RequestHandler } from 'express'
import type { Clock } from '../clock.js'
import { Problem } from './problem.js'
import { actorOf } from './session.js'

/** How many calls and commands one person may make, and in which time; in milliseconds. */
export const CALLS_AND_COMMANDS = { most: 60, withinMs: 10_000 } as const

/**
 * Lets a person make so many requests in any such span of time; refused ones count like the others. Stands
 * after sign-in and before everything else on the routes of calls and commands, one for all of them.
 */
export function limitPerPerson(
  clock: Clock,
  limit: { most: number; withinMs: number } = CALLS_AND_COMMANDS,
): RequestHandler {
  const past = new Map<string, number[]>()
  let sweepAt = 0

  function forget(since: number): void {
    for (const [id, times] of past) if ((times.at(-1) ?? 0) <= since) past.delete(id)
  }

  return (req, _res, next) => {
    const now = clock.now().getTime()
    if (now >= sweepAt) {
      forget(now - limit.withinMs)
      sweepAt = now + limit.withinMs
    }
    const { id } = actorOf(req)
    const recent = (past.get(id) ?? []).filter((at) => at > now - limit.withinMs)
    recent.push(now)
    // More than this many need not be remembered: the oldest decides how long to wait.
    past.set(id, recent.slice(-limit.most - 1))
    if (recent.length > limit.most) {
      const retryAfterS = Math.max(1, Math.ceil(((recent[1] ?? now) + limit.withinMs - now) / 1000))
      throw new Problem('too-many-requests', { extra: { retryAfterS } })
    }
    next()
  }
}
