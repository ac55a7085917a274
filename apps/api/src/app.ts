import compression from 'compression'
import express, { Router, type Express, type RequestHandler } from 'express'
import helmet from 'helmet'
import type { House } from './compose.js'
import { eventsRouter } from './modules/audit/index.js'
import { boardRouter } from './modules/board/index.js'
import { callsRouter } from './modules/calls/index.js'
import { casesRouter } from './modules/cases/index.js'
import { sizesRouter } from './modules/catalogue/index.js'
import { docsRouter } from './modules/docs/index.js'
import { healthRouter } from './modules/health/index.js'
import { labelsRouter } from './modules/labels/index.js'
import { LATER_FHIR_ROUTES, LATER_ROUTES, notBuiltRouter } from './modules/not-built/index.js'
import { peopleRouter } from './modules/people/index.js'
import { roomsRouter } from './modules/places/index.js'
import { meRouter, sessionRouter } from './modules/session/index.js'
import { sizingRouter } from './modules/sizing/index.js'
import { Problem, problemHandler } from './platform/http/problem.js'
import { requestScope } from './platform/http/scope.js'
import { authenticate } from './platform/http/session.js'
import { logReadings } from './platform/http/reading-log.js'
import { webRouter } from './platform/http/web.js'

/** Pure assembly: no listening, no connecting, no process signals. */
export function createApp(house: House): Express {
  const app = express()
  app.disable('x-powered-by')
  // A proxy that runs on this machine may say where a request came from, and that it came by https.
  app.set('trust proxy', 'loopback')
  app.set('etag', false)
  app.use(requestScope, house.metrics.measure, headers(), packed())

  app.get('/metrics', house.metrics.handler(house.live))
  app.use(docsRouter())
  app.use('/api/v1/health', healthRouter(house))
  app.use('/api/v1/session', sessionRouter({ ...house, options: house.signInOptions }))
  app.use('/api/v1', signedIn(house))
  app.use('/fhir/R4', authenticate(house.live), notBuiltRouter(LATER_FHIR_ROUTES, house))
  if (house.config.webDir !== null) app.use(webRouter(house.config.webDir))

  app.use(() => {
    throw new Problem('not-found')
  })
  app.use(problemHandler(house.log))
  return app
}

/**
 * Everything behind sign-in. Who asks is known before a body is read; calls and commands are counted before
 * that, so those routers read their bodies themselves.
 */
function signedIn(house: House): Router {
  const router = Router()
  router.use(authenticate(house.live))
  router.use((_req, res, next) => {
    res.setHeader('Cache-Control', 'no-store')
    next()
  })
  router.use(logReadings(house.log))
  router.use(callsRouter({ ...house.calls, body: house.readBody, limit: house.limit }))
  router.use(casesRouter(house))

  router.use(house.readBody)
  router.use(meRouter({ ...house, houseZone: house.config.houseZone }))
  router.use(peopleRouter(house))
  router.use(roomsRouter(house))
  router.use(sizesRouter({ ...house, houseZone: house.config.houseZone }))
  router.use(boardRouter(house.board))
  router.use(eventsRouter(house.events))
  router.use(labelsRouter(house))
  router.use(sizingRouter())
  router.use(notBuiltRouter(LATER_ROUTES, house))
  return router
}

/** Packs what is read. Answers to commands are short, and their way should be too. */
function packed(): RequestHandler {
  const pack = compression()
  return (req, res, next) => {
    if (req.method === 'GET') pack(req, res, next)
    else next()
  }
}

/** Vuetify writes its theme into a style element; nothing else may come from anywhere but this origin. */
const headers = (): ReturnType<typeof helmet> =>
  helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'self'"],
        scriptSrc: ["'self'"],
        styleSrc: ["'self'", "'unsafe-inline'"],
        imgSrc: ["'self'", 'data:', 'blob:'],
        fontSrc: ["'self'", 'data:'],
        connectSrc: ["'self'"],
        workerSrc: ["'self'", 'blob:'],
        objectSrc: ["'none'"],
        baseUri: ["'self'"],
        formAction: ["'self'"],
        frameAncestors: ["'none'"],
      },
    },
    // The house may well be served by plain http inside its own walls.
    strictTransportSecurity: false,
    crossOriginOpenerPolicy: false,
    originAgentCluster: false,
    referrerPolicy: { policy: 'same-origin' },
  })
