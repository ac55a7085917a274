import { createRouter, createWebHistory, type RouteLocationRaw } from 'vue-router'
import { watch } from 'vue'
import { homeOf, mayOpen, pathOf, type ScreenOrPage } from '@/composables/access'
import { usePeopleStore } from '@/stores/people'
import { useSessionStore } from '@/stores/session'

declare module 'vue-router' {
  interface RouteMeta {
    /** Which rule of `composables/access.ts` opens it; left out, everybody who is signed in. */
    screen?: ScreenOrPage
    /** Open to whoever is not signed in, and to nobody else. */
    signedOut?: true
    /** The top bar shows what the view puts there (`BarContext`) in place of the navigation. */
    bar?: 'context'
    /** The view has tabs of its own at the foot of the phone, in place of the screens'. */
    tabs?: 'own'
  }
}

export const router = createRouter({
  history: createWebHistory(),
  scrollBehavior: (_to, _from, saved) => saved ?? { top: 0 },
  routes: [
    { path: '/', name: 'home', component: () => import('@/views/NotFoundView.vue') },
    {
      path: '/sign-in',
      name: 'signIn',
      meta: { signedOut: true },
      component: () => import('@/views/sign-in/SignInView.vue'),
    },
    {
      path: '/rooms/:number(\\d+)',
      name: 'room',
      meta: { screen: 'room', bar: 'context' },
      component: () => import('@/views/room/RoomView.vue'),
      props: ({ params }) => ({ number: Number(params['number']) }),
    },
    {
      path: '/dispatch',
      name: 'dispatch',
      meta: { screen: 'dispatch', tabs: 'own' },
      component: () => import('@/views/dispatch/DispatchView.vue'),
    },
    {
      path: '/fetch',
      name: 'fetch',
      meta: { screen: 'fetch' },
      component: () => import('@/views/fetch/FetchView.vue'),
    },
    {
      path: '/verify/:itemId',
      name: 'verify',
      meta: { screen: 'verify', bar: 'context' },
      component: () => import('@/views/verify/VerifyView.vue'),
      props: true,
    },
    {
      path: '/cases',
      name: 'cases',
      meta: { screen: 'cases' },
      component: () => import('@/views/cases/CasesView.vue'),
    },
    {
      path: '/cases/:id',
      name: 'case',
      meta: { screen: 'case' },
      component: () => import('@/views/cases/CaseView.vue'),
      props: true,
    },
    { path: '/:pathMatch(.*)*', name: 'notFound', component: () => import('@/views/NotFoundView.vue') },
  ],
})

router.beforeEach(async (to): Promise<RouteLocationRaw | boolean> => {
  const session = useSessionStore()
  await session.settled()
  const role = session.role
  if (role === null) {
    if (to.meta.signedOut) return true
    const asked = to.fullPath === '/' ? {} : { query: { to: to.fullPath } }
    return { name: 'signIn', ...asked, replace: true }
  }
  if (to.name === 'home' || to.meta.signedOut) return { path: await homePath(), replace: true }
  if (to.meta.screen && !mayOpen(role, to.meta.screen)) return { path: await homePath(), replace: true }
  return true
})

/** Where the signed-in person works. */
async function homePath(): Promise<string> {
  const session = useSessionStore()
  if (session.role === null) return '/sign-in'
  const screen = homeOf(session.role)
  if (screen !== 'room' || session.myRooms[0] !== undefined) return pathOf(screen, session.myRooms[0] ?? null)
  const people = usePeopleStore()
  if (people.rooms.length === 0) await people.load().catch(() => undefined)
  return pathOf(screen, people.rooms[0]?.number ?? null)
}

/** Leaves for the sign-in page when the session ends; comes back to the same place after it. */
export function followSession(): void {
  const session = useSessionStore()
  watch(
    () => session.phase,
    (phase) => {
      const here = router.currentRoute.value
      if (phase !== 'signedOut' || here.meta.signedOut || here.matched.length === 0) return
      const asked = session.why === 'ended' ? { query: { to: here.fullPath } } : {}
      void router.replace({ name: 'signIn', ...asked })
    },
  )
}
