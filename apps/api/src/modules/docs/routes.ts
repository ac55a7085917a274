import {
  boardSnapshot,
  CALL_COMMAND_BODIES,
  callView,
  caseCommand,
  casesQuery,
  caseView,
  eventsPage,
  eventsQuery,
  headQuery,
  headView,
  id,
  ITEM_COMMAND_BODIES,
  labelView,
  makeCall,
  meView,
  parseLabel,
  personRef,
  railView,
  roomView,
  sessionView,
  signIn,
  signInOptions,
  type ProblemCode,
} from '@bellpull/contracts'
import { z } from 'zod'

/** One route as the document tells it. */
export interface DocumentedRoute {
  readonly method: 'get' | 'post' | 'delete'
  /** Below `/api/v1`, in OpenAPI's way of writing parameters. */
  readonly path: string
  readonly tag: string
  readonly summary: string
  readonly anonymous?: true
  readonly key?: 'required' | 'welcome'
  readonly query?: z.ZodObject
  readonly body?: z.ZodType
  readonly status?: 201 | 204
  readonly answer?: z.ZodType
  /** Refusals beyond those that every route has. */
  readonly refusals?: readonly ProblemCode[]
}

export const pathId = z.object({ id })

const anyOf = (bodies: Record<string, z.ZodType>): z.ZodType =>
  z.union(Object.values(bodies) as [z.ZodType, z.ZodType])
const health = z.object({ status: z.string() })

/** Every route of this release. A test holds the list against what the server has mounted. */
export const DOCUMENTED_ROUTES: readonly DocumentedRoute[] = [
  {
    method: 'get',
    path: '/session/options',
    tag: 'Session',
    summary: 'What the sign-in page may offer',
    anonymous: true,
    answer: signInOptions,
  },
  {
    method: 'post',
    path: '/session',
    tag: 'Session',
    summary: 'Sign in',
    anonymous: true,
    body: signIn,
    answer: sessionView,
    refusals: ['wrong-credentials', 'too-many-attempts'],
  },
  {
    method: 'post',
    path: '/session/refresh',
    tag: 'Session',
    summary: 'A new access token for the refresh cookie, which is exchanged too',
    anonymous: true,
    answer: sessionView,
    refusals: ['not-signed-in'],
  },
  {
    method: 'delete',
    path: '/session',
    tag: 'Session',
    summary: 'Sign out',
    status: 204,
  },
  {
    method: 'get',
    path: '/me',
    tag: 'Session',
    summary: 'Who is signed in, and where they work today',
    answer: meView,
  },
  {
    method: 'get',
    path: '/people',
    tag: 'People',
    summary: 'Who works here now',
    answer: z.array(personRef),
  },
  {
    method: 'get',
    path: '/rooms',
    tag: 'Cases',
    summary: 'Every room with its revision',
    answer: z.array(roomView),
  },
  {
    method: 'get',
    path: '/cases',
    tag: 'Cases',
    summary: 'The cases of a day, today unless said otherwise, in order of start',
    query: casesQuery,
    answer: z.array(caseView),
  },
  {
    method: 'get',
    path: '/cases/{id}',
    tag: 'Cases',
    summary: 'One case',
    answer: caseView,
    refusals: ['not-found'],
  },
  {
    method: 'post',
    path: '/cases/{id}/commands',
    tag: 'Cases',
    summary: 'Start, time-out, sign-out, reopen, cancel',
    key: 'required',
    body: caseCommand,
    answer: caseView,
    refusals: [
      'not-found',
      'case-closed',
      'case-moved-on',
      'not-settled',
      'patient-not-out',
      'too-many-requests',
    ],
  },
  {
    method: 'get',
    path: '/cases/{id}/sizes',
    tag: 'Cases',
    summary: 'Every size that may be called for the case, and how many there are',
    answer: z.array(railView),
    refusals: ['not-found'],
  },
  {
    method: 'get',
    path: '/cases/{id}/calls',
    tag: 'Calls',
    summary: 'Every call of the case',
    answer: z.array(callView),
    refusals: ['not-found'],
  },
  {
    method: 'post',
    path: '/cases/{id}/calls',
    tag: 'Calls',
    summary: 'Make a call: a package is held for each item, or the answer says that none was free',
    key: 'required',
    body: makeCall,
    status: 201,
    answer: callView,
    refusals: [
      'not-found',
      'case-closed',
      'not-a-caller',
      'side-not-of-case',
      'unknown-item',
      'not-called-here',
      'too-many-requests',
    ],
  },
  {
    method: 'post',
    path: '/calls/{id}/commands',
    tag: 'Calls',
    summary: 'A command on a whole call',
    key: 'required',
    body: anyOf(CALL_COMMAND_BODIES),
    answer: callView,
    refusals: ['not-found', 'call-moved-on', 'own-call', 'not-read-back', 'none-free', 'too-many-requests'],
  },
  {
    method: 'post',
    path: '/items/{id}/commands',
    tag: 'Calls',
    summary: 'A command on one item; pull, verify and open may carry what was scanned',
    key: 'required',
    body: anyOf(ITEM_COMMAND_BODIES),
    answer: callView,
    refusals: [
      'not-found',
      'item-moved-on',
      'none-free',
      'wrong-item',
      'label-differs',
      'label-unreadable',
      'unit-held-elsewhere',
      'not-the-pulled-unit',
      'unit-expired',
      'second-checker-needed',
      'wrong-pin',
      'not-as-heard',
      'not-intact',
      'verify-again',
      'nothing-to-undo',
      'too-many-requests',
    ],
  },
  {
    method: 'get',
    path: '/board',
    tag: 'Calls',
    summary: 'Every open call, and the revision of each room at the same moment',
    answer: boardSnapshot,
  },
  {
    method: 'get',
    path: '/events',
    tag: 'Events',
    summary: 'What happened, in order of commit: of a case or call for everybody, of the house for a few',
    query: eventsQuery,
    answer: eventsPage,
    refusals: ['not-found'],
  },
  {
    method: 'post',
    path: '/labels/parse',
    tag: 'Labels and sizing',
    summary: 'What a scan says',
    key: 'welcome',
    body: parseLabel,
    answer: labelView,
    refusals: ['label-unreadable'],
  },
  {
    method: 'get',
    path: '/sizing/head',
    tag: 'Labels and sizing',
    summary: 'Radius and height of a head from its base and ratio, in mm: arithmetic, no advice',
    query: headQuery,
    answer: headView,
  },
  {
    method: 'get',
    path: '/health/live',
    tag: 'Machines',
    summary: 'The process runs',
    anonymous: true,
    answer: health,
  },
  {
    method: 'get',
    path: '/health/ready',
    tag: 'Machines',
    summary: 'The database answers',
    anonymous: true,
    answer: health,
    refusals: ['unavailable'],
  },
  {
    method: 'get',
    path: '/openapi.json',
    tag: 'Machines',
    summary: 'This document',
    anonymous: true,
    answer: z.looseObject({}),
  },
]
