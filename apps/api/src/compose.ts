import express, { type RequestHandler } from 'express'
import type { DataSource } from 'typeorm'
import { DEMO_PASSWORD } from './demo/people.js'
import { EventsService } from './modules/audit/index.js'
import { BoardService } from './modules/board/index.js'
import { CallCommands, CallMaker, CallTransaction } from './modules/calls/index.js'
import { CasesService } from './modules/cases/index.js'
import {
  AccessTokens,
  LiveSessions,
  PinService,
  SessionService,
  SignInOptionsService,
} from './modules/session/index.js'
import type { Clock } from './platform/clock.js'
import type { Config } from './platform/config.js'
import { Database } from './platform/db/sql.js'
import { idempotent } from './platform/http/idempotency.js'
import { limitPerPerson } from './platform/http/rate-limit.js'
import type { Logger } from './platform/log.js'
import { Metrics } from './platform/metrics.js'
import type { Publisher } from './platform/realtime/publisher.js'

/** What a house is made of before anything is built. */
export interface Parts {
  readonly config: Config
  readonly clock: Clock
  readonly log: Logger
  /** Connected, or about to be. */
  readonly dataSource: DataSource
  readonly publisher: Publisher
  /** How many sockets are open in this process. */
  readonly socketCount: () => number
}

/** Every service, built once and by hand, and what the routes share. */
export interface House extends Parts {
  readonly database: Database
  readonly metrics: Metrics
  readonly live: LiveSessions
  readonly sessions: SessionService
  readonly signInOptions: SignInOptionsService
  readonly pins: PinService
  readonly cases: CasesService
  readonly board: BoardService
  readonly events: EventsService
  readonly calls: { maker: CallMaker; commands: CallCommands; transaction: CallTransaction }
  /** Reads a JSON body, 1 MiB at most; stands after sign-in. */
  readonly readBody: RequestHandler
  /** One limit for the calls and commands of a person, wherever they are sent. */
  readonly limit: RequestHandler
  readonly idempotent: RequestHandler
}

const BODY_MAX_BYTES = 1 << 20
/** Ending of the demo's addresses; `.example` can belong to nobody. */
const DEMO_EMAIL_ENDING = '@larchwater.example'

export function compose(parts: Parts): House {
  const { config, clock, dataSource, publisher } = parts
  const database = new Database(dataSource)
  const tokens = new AccessTokens(config.tokenSecret, clock)
  const live = new LiveSessions(database, tokens, clock)
  const pins = new PinService(database, clock)
  const transaction = new CallTransaction(database, clock, publisher)
  return {
    ...parts,
    database,
    metrics: new Metrics(parts.socketCount),
    live,
    sessions: new SessionService(database, clock, tokens, live, publisher),
    signInOptions: new SignInOptionsService(
      dataSource,
      config.houseName,
      config.demo ? { password: DEMO_PASSWORD, emailEnding: DEMO_EMAIL_ENDING } : null,
    ),
    pins,
    cases: new CasesService({ database, clock, publisher, houseZone: config.houseZone }),
    board: new BoardService(database, clock),
    events: new EventsService(database),
    calls: { maker: new CallMaker(transaction), commands: new CallCommands(transaction, pins), transaction },
    readBody: express.json({ limit: BODY_MAX_BYTES }),
    limit: limitPerPerson(clock),
    idempotent: idempotent(database, clock),
  }
}
