import { ROLES } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { homeOf, mayOpen, pathOf, screensOf } from './access'

describe('screens by role', () => {
  test.each([
    { role: 'surgeon', screens: ['room', 'dispatch', 'cases'], home: 'room', verify: false },
    { role: 'scrub', screens: ['room', 'dispatch', 'cases'], home: 'room', verify: false },
    { role: 'circulator', screens: ['room', 'dispatch', 'fetch', 'cases'], home: 'dispatch', verify: true },
    { role: 'runner', screens: ['dispatch', 'fetch', 'cases'], home: 'dispatch', verify: false },
    { role: 'core', screens: ['dispatch', 'fetch', 'cases'], home: 'fetch', verify: false },
    { role: 'charge', screens: ['room', 'dispatch', 'fetch', 'cases'], home: 'dispatch', verify: true },
    { role: 'coordinator', screens: ['dispatch', 'fetch', 'cases'], home: 'dispatch', verify: false },
    { role: 'admin', screens: ['dispatch', 'cases'], home: 'dispatch', verify: false },
  ] as const)('$role: $screens', ({ role, screens, home, verify }) => {
    expect(screensOf(role)).toEqual(screens)
    expect(homeOf(role)).toBe(home)
    expect(mayOpen(role, 'verify')).toBe(verify)
  })

  test('nobody starts on a screen that they may not open', () => {
    for (const role of ROLES) expect(mayOpen(role, homeOf(role)), role).toBe(true)
  })

  test('a room has its number; without one the cases are shown', () => {
    expect([pathOf('room', 3), pathOf('room', null), pathOf('fetch', 3)]).toEqual([
      '/rooms/3',
      '/cases',
      '/fetch',
    ])
  })
})
