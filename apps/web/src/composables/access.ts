import { callCommandPermission, itemCommandPermission, may, type Role } from '@bellpull/domain'

/** Screens that the navigation leads to. */
export const SCREENS = ['room', 'dispatch', 'fetch', 'cases'] as const
export type Screen = (typeof SCREENS)[number]
export type ScreenOrPage = Screen | 'verify' | 'case'

const ACCESS: Readonly<Record<ScreenOrPage, (role: Role) => boolean>> = {
  room: (role) => may(role, 'call.make'),
  dispatch: (role) => may(role, 'board.read'),
  fetch: (role) => itemCommandPermission('shelve', role).ok || itemCommandPermission('pull', role).ok,
  cases: (role) => may(role, 'cases.read'),
  verify: (role) => callCommandPermission('verify', role).ok,
  case: (role) => may(role, 'cases.read'),
}

/** May somebody of this role open the screen? What they may do there, the lifecycle table says. */
export const mayOpen = (role: Role, screen: ScreenOrPage): boolean => ACCESS[screen](role)

export const screensOf = (role: Role): Screen[] => SCREENS.filter((screen) => mayOpen(role, screen))

/** The screen that a role works on. */
export function homeOf(role: Role): Screen {
  if (role === 'surgeon' || role === 'scrub') return 'room'
  return role === 'core' ? 'fetch' : 'dispatch'
}

/** Path of a screen; a room needs its number. */
export function pathOf(screen: Screen, roomNumber: number | null): string {
  if (screen === 'room') return roomNumber === null ? '/cases' : `/rooms/${roomNumber}`
  return `/${screen}`
}
