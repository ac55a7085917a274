import type { CaseView } from '@bellpull/contracts'
import { may, type Role } from '@bellpull/domain'

export const CASE_ACTIONS = ['start', 'endTimeOut', 'signOut', 'timeOut', 'reopen', 'cancel'] as const
export type CaseAction = (typeof CASE_ACTIONS)[number]

type State = Pick<CaseView, 'status' | 'timeOutAt' | 'timeOutEndedAt'>

/** A time-out is running: nothing interrupts but a hard stop. */
export const isTimeOut = ({ timeOutAt, timeOutEndedAt }: State): boolean =>
  timeOutAt !== null && timeOutEndedAt === null

/** What somebody of this role may do with the case as it stands, the next thing first. */
export function caseActions(one: State, role: Role): CaseAction[] {
  const runs = one.status === 'inProgress'
  const isOpen = runs || one.status === 'planned'
  const offered: Record<CaseAction, boolean> = {
    start: one.status === 'planned' && may(role, 'case.start'),
    timeOut: runs && !isTimeOut(one) && may(role, 'case.timeOut'),
    endTimeOut: runs && isTimeOut(one) && may(role, 'case.timeOut'),
    signOut: runs && may(role, 'case.signOut'),
    reopen: !isOpen && may(role, 'case.reopen'),
    cancel: isOpen && may(role, 'case.cancel'),
  }
  return CASE_ACTIONS.filter((action) => offered[action])
}
