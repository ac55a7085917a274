import type { CaseCommand, CaseStatus, EventType } from '@bellpull/contracts'
import type { Role } from '@bellpull/domain'
import { Problem } from '../../platform/http/problem.js'

/** A case as its commands need it. */
export interface CaseState {
  readonly status: CaseStatus
  readonly startedAt: Date | null
  readonly timeOutAt: Date | null
  readonly timeOutEndedAt: Date | null
  readonly patientOutAt: Date | null
  readonly closedAt: Date | null
  readonly statusReason: string | null
}

/** Something called for the case that has no outcome. */
export interface Unsettled {
  readonly itemId: string
  readonly callId: string
  readonly label: string
  readonly variant: string | null
  readonly stage: string
}

export interface CaseStep {
  readonly state: CaseState
  readonly event: EventType
}

export interface Asked {
  readonly command: CaseCommand
  readonly role: Role
  readonly now: Date
  readonly unsettled: readonly Unsettled[]
}

/**
 * What a command makes of a case. Nothing else decides the status of a case.
 *
 * @throws {Problem} why not.
 */
export function nextCase(from: CaseState, asked: Asked): CaseStep {
  switch (asked.command.name) {
    case 'start':
      return start(from, asked)
    case 'timeOut':
      return asked.command.ended ? endTimeOut(from, asked) : beginTimeOut(from, asked)
    case 'signOut':
      return signOut(from, asked)
    case 'reopen':
      return reopen(from, asked)
    case 'cancel':
      return cancel(from, asked)
  }
}

function start(from: CaseState, { now }: Asked): CaseStep {
  if (from.status === 'inProgress') throw movedOn('The case has already been started.')
  if (from.status !== 'planned') throw notOpen(from)
  return { state: { ...from, status: 'inProgress', startedAt: now }, event: 'case.started' }
}

function beginTimeOut(from: CaseState, { now }: Asked): CaseStep {
  mustRun(from)
  if (isTimeOut(from)) throw movedOn('The time-out has already begun.')
  return { state: { ...from, timeOutAt: now, timeOutEndedAt: null }, event: 'case.timeOutStarted' }
}

function endTimeOut(from: CaseState, { now }: Asked): CaseStep {
  mustRun(from)
  if (!isTimeOut(from)) throw movedOn('No time-out is running.')
  return { state: { ...from, timeOutEndedAt: now }, event: 'case.timeOutEnded' }
}

const isTimeOut = (from: CaseState): boolean => from.timeOutAt !== null && from.timeOutEndedAt === null

/**
 * Closes the case, once everything called for it has an outcome. A patient may leave before that: saying so is
 * recorded and leaves the case open, for the coordinator among others.
 */
function signOut(from: CaseState, { command, role, now, unsettled }: Asked): CaseStep {
  mustRun(from)
  if (role === 'coordinator' && from.patientOutAt === null) throw new Problem('patient-not-out')
  const leavesNow = command.patientOut === true && from.patientOutAt === null
  const patientOutAt = leavesNow ? now : from.patientOutAt
  if (unsettled.length > 0 && leavesNow) return { state: { ...from, patientOutAt }, event: 'case.patientOut' }
  mustBeSettled(unsettled)
  return {
    state: { ...endOfTimeOut(from, now), status: 'closed', patientOutAt, closedAt: now },
    event: 'case.signedOut',
  }
}

function reopen(from: CaseState, { command }: Asked): CaseStep {
  const statusReason = reasonOf(command)
  if (from.status !== 'closed' && from.status !== 'cancelled') throw movedOn('The case is open.')
  const status = from.startedAt === null ? 'planned' : 'inProgress'
  return { state: { ...from, status, closedAt: null, statusReason }, event: 'case.reopened' }
}

function cancel(from: CaseState, { command, now, unsettled }: Asked): CaseStep {
  const statusReason = reasonOf(command)
  if (from.status !== 'planned' && from.status !== 'inProgress') throw notOpen(from)
  mustBeSettled(unsettled)
  return { state: { ...endOfTimeOut(from, now), status: 'cancelled', statusReason }, event: 'case.cancelled' }
}

/** Nobody waits for a time-out in a room that is empty. */
const endOfTimeOut = (from: CaseState, now: Date): CaseState =>
  isTimeOut(from) ? { ...from, timeOutEndedAt: now } : from

function mustRun(from: CaseState): void {
  if (from.status === 'planned') throw movedOn('The case has not been started.')
  if (from.status !== 'inProgress') throw notOpen(from)
}

function mustBeSettled(unsettled: readonly Unsettled[]): void {
  if (unsettled.length > 0) throw new Problem('not-settled', { extra: { unsettled } })
}

/** @throws {Problem} `invalid-input`; the contract cannot say that two of its commands need a reason. */
export function reasonOf(command: CaseCommand): string {
  if (command.reason === undefined)
    throw new Problem('invalid-input', { errors: [{ pointer: '/reason', message: 'is missing' }] })
  return command.reason
}

const movedOn = (detail: string): Problem => new Problem('case-moved-on', { detail })
const notOpen = (from: CaseState): Problem =>
  new Problem('case-closed', { detail: `The case is ${from.status}.`, extra: { status: from.status } })
