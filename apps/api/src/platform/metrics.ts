import type { Request, RequestHandler } from 'express'
import { collectDefaultMetrics, Gauge, Histogram, Registry } from 'prom-client'
import type { Authenticator } from './http/session.js'
import { bearerToken } from './http/session.js'
import { Problem } from './http/problem.js'

/** What this process measures of itself, for Prometheus. Nothing in it names a person or a case. */
export class Metrics {
  readonly registry = new Registry()
  readonly #durations: Histogram<'method' | 'route' | 'status'>

  /** @param socketCount how many sockets are open now. */
  constructor(socketCount: () => number) {
    collectDefaultMetrics({ register: this.registry, prefix: 'bellpull_' })
    this.#durations = new Histogram({
      name: 'bellpull_http_request_duration_seconds',
      help: 'Time from request to answer, by route',
      labelNames: ['method', 'route', 'status'],
      buckets: [0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 5],
      registers: [this.registry],
    })
    new Gauge({
      name: 'bellpull_sockets_open',
      help: 'Sockets that are open',
      registers: [this.registry],
      collect() {
        this.set(socketCount())
      },
    })
  }

  /** Measures every request under its route, ids left out. */
  readonly measure: RequestHandler = (req, res, next) => {
    const startedNs = process.hrtime.bigint()
    res.once('finish', () => {
      const seconds = Number(process.hrtime.bigint() - startedNs) / 1e9
      this.#durations.observe(
        { method: req.method, route: routeOf(req), status: String(res.statusCode) },
        seconds,
      )
    })
    next()
  }

  /** `GET /metrics`: for whoever asks from this machine itself, or an administrator. */
  handler(sessions: Authenticator): RequestHandler {
    return async (req, res) => {
      if (!isFromThisMachine(req)) {
        const token = bearerToken(req)
        if (token === null) throw new Problem('not-signed-in')
        const actor = await sessions.authenticate(token)
        if (actor.role !== 'admin') throw new Problem('not-permitted')
      }
      res.type(this.registry.contentType).send(await this.registry.metrics())
    }
  }
}

/** The route that took the request, with names in place of ids; `none` where there was none. */
function routeOf(req: Request): string {
  const path: unknown = (req.route as { path?: unknown } | undefined)?.path
  if (typeof path !== 'string') return 'none'
  if (path.includes('*')) return path
  // Once an answer is a refusal, Express has forgotten under which prefix the route was mounted.
  const segments = (text: string): string[] => text.split('/').filter(Boolean)
  const whole = segments(req.originalUrl.replace(/\?.*$/s, ''))
  const prefix = whole.slice(0, Math.max(0, whole.length - segments(path).length))
  return ['', ...prefix, ...segments(path)].join('/')
}

/** Loopback, and not merely passed on by a proxy that runs here too. */
function isFromThisMachine(req: Request): boolean {
  const forwarded = req.headers['x-forwarded-for'] ?? req.headers.forwarded
  const address = req.socket.remoteAddress ?? ''
  return forwarded === undefined && /^(::1|(::ffff:)?127\.)/.test(address)
}
