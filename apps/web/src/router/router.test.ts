import type { Role } from '@bellpull/domain'
import { createPinia, setActivePinia } from 'pinia'
import { beforeEach, describe, expect, test, vi } from 'vitest'
import { nextTick } from 'vue'
import { id } from '../../test/views'
import { useSessionStore } from '@/stores/session'
import { followSession, router } from './index'

const empty = vi.hoisted(() => () => ({ default: { render: () => null } }))
vi.mock('@/views/NotFoundView.vue', empty)
vi.mock('@/views/sign-in/SignInView.vue', empty)
vi.mock('@/views/room/RoomView.vue', empty)
vi.mock('@/views/dispatch/DispatchView.vue', empty)
vi.mock('@/views/fetch/FetchView.vue', empty)
vi.mock('@/views/verify/VerifyView.vue', empty)
vi.mock('@/views/cases/CasesView.vue', empty)
vi.mock('@/views/cases/CaseView.vue', empty)

/** Somebody of this role, working in room 3; `null` for nobody. */
function signedIn(role: Role | null) {
  setActivePinia(createPinia())
  const session = useSessionStore()
  session.phase = role === null ? 'signedOut' : 'signedIn'
  if (role !== null) {
    const user = { id: id(1), name: 'Wren Abernoth', initials: 'WA', role }
    session.user = user
    session.me = {
      ...user,
      rooms: [{ id: id(103), number: 3 }],
      house: { zone: 'UTC', today: '2032-05-12', sizingArithmetic: true, secondCheckMethods: ['spoken'] },
    }
  }
  return session
}

async function open(path: string): Promise<string> {
  await router.push(path)
  return router.currentRoute.value.fullPath
}

beforeEach(async () => {
  signedIn('admin')
  await router.push('/nowhere')
})

describe('where an address leads', () => {
  test.each([
    { role: null, to: '/', opens: '/sign-in' },
    { role: null, to: '/dispatch', opens: '/sign-in?to=/dispatch' },
    { role: null, to: '/nowhere-else', opens: '/sign-in?to=/nowhere-else' },
    { role: 'surgeon', to: '/', opens: '/rooms/3' },
    { role: 'scrub', to: '/sign-in', opens: '/rooms/3' },
    { role: 'circulator', to: '/', opens: '/dispatch' },
    { role: 'core', to: '/', opens: '/fetch' },
    { role: 'coordinator', to: '/', opens: '/dispatch' },
    { role: 'surgeon', to: '/fetch', opens: '/rooms/3' },
    { role: 'runner', to: '/rooms/3', opens: '/dispatch' },
    { role: 'runner', to: '/verify/1', opens: '/dispatch' },
    { role: 'circulator', to: '/verify/1', opens: '/verify/1' },
    { role: 'circulator', to: '/rooms/7', opens: '/rooms/7' },
    { role: 'admin', to: '/cases/1', opens: '/cases/1' },
    { role: 'admin', to: '/rooms/three', opens: '/rooms/three' },
  ] as const)('$role: $to opens $opens', async ({ role, to, opens }) => {
    signedIn(role)
    expect(await open(to)).toBe(opens)
  })

  test('an address that is none is said to be none', async () => {
    expect(await open('/rooms/three')).toBe('/rooms/three')
    expect(router.currentRoute.value.name).toBe('notFound')
  })
})

test('a session that ends leads to the sign-in page, which knows the way back', async () => {
  const session = signedIn('circulator')
  await open('/dispatch')
  followSession()
  session.why = 'ended'
  session.user = null
  session.phase = 'signedOut'
  await nextTick()
  await vi.waitFor(() => expect(router.currentRoute.value.fullPath).toBe('/sign-in?to=/dispatch'))
})
