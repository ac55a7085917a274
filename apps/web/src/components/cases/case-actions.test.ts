import { ROLES, type Role } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { caseActions, isTimeOut } from './case-actions'

const AT = '2026-06-02T10:00:00.000Z'
const STATES = {
  planned: { status: 'planned', timeOutAt: null, timeOutEndedAt: null },
  running: { status: 'inProgress', timeOutAt: null, timeOutEndedAt: null },
  'time-out': { status: 'inProgress', timeOutAt: AT, timeOutEndedAt: null },
  'after time-out': { status: 'inProgress', timeOutAt: AT, timeOutEndedAt: AT },
  closed: { status: 'closed', timeOutAt: AT, timeOutEndedAt: AT },
  cancelled: { status: 'cancelled', timeOutAt: null, timeOutEndedAt: null },
} as const

/** The design's table of permissions, and the steps that each status allows; the first is the next thing. */
const OFFERED: Record<keyof typeof STATES, Record<Role, string>> = {
  planned: {
    surgeon: 'start',
    scrub: 'start',
    circulator: 'start',
    runner: '',
    core: '',
    charge: 'start cancel',
    coordinator: 'cancel',
    admin: '',
  },
  running: {
    surgeon: 'timeOut',
    scrub: 'timeOut',
    circulator: 'signOut timeOut',
    runner: '',
    core: '',
    charge: 'signOut timeOut cancel',
    coordinator: 'signOut cancel',
    admin: '',
  },
  'time-out': {
    surgeon: 'endTimeOut',
    scrub: 'endTimeOut',
    circulator: 'endTimeOut signOut',
    runner: '',
    core: '',
    charge: 'endTimeOut signOut cancel',
    coordinator: 'signOut cancel',
    admin: '',
  },
  'after time-out': {
    surgeon: 'timeOut',
    scrub: 'timeOut',
    circulator: 'signOut timeOut',
    runner: '',
    core: '',
    charge: 'signOut timeOut cancel',
    coordinator: 'signOut cancel',
    admin: '',
  },
  closed: {
    surgeon: '',
    scrub: '',
    circulator: '',
    runner: '',
    core: '',
    charge: 'reopen',
    coordinator: 'reopen',
    admin: '',
  },
  cancelled: {
    surgeon: '',
    scrub: '',
    circulator: '',
    runner: '',
    core: '',
    charge: 'reopen',
    coordinator: 'reopen',
    admin: '',
  },
}

describe.each(Object.keys(STATES) as (keyof typeof STATES)[])('a case that is %s', (state) => {
  test.each(ROLES.map((role) => [role, OFFERED[state][role]] as const))('offers %s: %s', (role, offered) => {
    expect(caseActions(STATES[state], role).join(' ')).toBe(offered)
  })
})

test('a time-out runs from its beginning to its end', () => {
  expect(
    Object.entries(STATES)
      .filter(([, state]) => isTimeOut(state))
      .map(([name]) => name),
  ).toEqual(['time-out'])
})
