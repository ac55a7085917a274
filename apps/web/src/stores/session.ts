import type { HouseView, MeView, SignedInUser } from '@bellpull/contracts'
import { may, type Permission } from '@bellpull/domain'
import { defineStore } from 'pinia'
import { computed, ref, shallowRef, watch } from 'vue'
import { http } from '@/api/http'
import { ApiProblem } from '@/api/problem'
import { sessionApi } from '@/api/session'
import { useBoardStore } from './board'
import { useCasesStore } from './cases'
import { useClockStore } from './clock'
import { useCommandsStore } from './commands'
import { useLiveStore } from './live'
import { usePeopleStore } from './people'
import { useUnsentStore } from './unsent'

/** Until the house has said otherwise: the device's zone, and nothing that a house must first allow. */
const UNKNOWN_HOUSE: HouseView = {
  zone: Intl.DateTimeFormat().resolvedOptions().timeZone,
  today: '',
  sizingArithmetic: false,
  secondCheckMethods: ['spoken', 'pin'],
}

/** The house has yet to hear that somebody signed out on this device; kept over a reload. */
const signOutDue = {
  read(): boolean {
    try {
      return localStorage.getItem('bellpull.sign-out-due') !== null
    } catch {
      return false
    }
  },
  write(due: boolean): void {
    try {
      if (due) localStorage.setItem('bellpull.sign-out-due', '1')
      else localStorage.removeItem('bellpull.sign-out-due')
    } catch {
      // A browser that keeps nothing asks for the session again.
    }
  },
}

/** Who is signed in on this screen, and what follows from it. */
export const useSessionStore = defineStore('session', () => {
  const board = useBoardStore()
  const cases = useCasesStore()
  const people = usePeopleStore()
  const clock = useClockStore()
  const live = useLiveStore()
  const commands = useCommandsStore()
  const unsent = useUnsentStore()

  const user = shallowRef<SignedInUser | null>(null)
  const me = shallowRef<MeView | null>(null)
  const phase = ref<'unknown' | 'away' | 'signedOut' | 'signedIn'>('unknown')
  /** Why the sign-in page is there, when somebody did not ask for it. */
  const why = ref<'ended' | 'signedOut' | null>(null)

  const role = computed(() => user.value?.role ?? null)
  const house = computed(() => me.value?.house ?? UNKNOWN_HOUSE)
  /** Numbers of the rooms of today's cases on whose team this person is. */
  const myRooms = computed(() => me.value?.rooms.map(({ number }) => number) ?? [])
  const mayDo = (permission: Permission): boolean => role.value !== null && may(role.value, permission)

  http.listen({
    ended: () => leave('ended'),
    serverTime: (serverMs, sentMs, receivedMs) => clock.learn(serverMs, sentMs, receivedMs),
  })

  /** @throws {ApiProblem} `wrong-credentials`, `too-many-attempts`. @throws {NotSent} */
  async function signIn(email: string, password: string): Promise<void> {
    const view = await sessionApi.signIn({ email, password })
    http.keep(view)
    signOutDue.write(false)
    await enter(view.user)
  }

  /** Resolves as soon as it is known whether somebody is signed in; with the line away that takes as long as it takes. */
  async function settled(): Promise<void> {
    if (phase.value === 'unknown') await (restoring ??= restore())
    if (phase.value !== 'away') return
    await new Promise<void>((resolve) => {
      const stop = watch(phase, (now) => {
        if (now === 'away') return
        stop()
        resolve()
      })
    })
  }
  let restoring: Promise<void> | null = null

  /** Opens the session that the cookie still carries; asked once, when the application starts. */
  async function restore(): Promise<void> {
    try {
      if (signOutDue.read()) return await finishSignOut()
      const { user: found } = await sessionApi.restore()
      await enter(found)
    } catch (error) {
      // Without a line nobody knows whether the session lives: that is no reason to sign out.
      phase.value = error instanceof ApiProblem && error.status === 401 ? 'signedOut' : 'away'
    }
  }

  /** Somebody signed out while the line was away: nobody may come in by their cookie. */
  async function finishSignOut(): Promise<void> {
    phase.value = 'signedOut'
    await tellSignOut()
  }

  async function enter(found: SignedInUser): Promise<void> {
    me.value = await sessionApi.me()
    user.value = found
    phase.value = 'signedIn'
    why.value = null
    clock.start()
    live.connect(() => leave('ended'))
    people.load().catch(() => undefined)
  }

  /** Reads again which rooms are this person's and what day it is. @throws {ApiProblem | NotSent} */
  async function refreshMe(): Promise<void> {
    me.value = await sessionApi.me()
  }

  /** Signs out, here at once and in the house as soon as it hears it. */
  async function signOut(): Promise<void> {
    signOutDue.write(true)
    // The request takes the token with it before it is dropped here.
    const told = tellSignOut()
    leave('signedOut')
    await told
  }

  async function tellSignOut(): Promise<void> {
    try {
      await sessionApi.signOut()
      signOutDue.write(false)
    } catch (error) {
      // Refused: there is no session any more.
      if (error instanceof ApiProblem && error.status === 401) signOutDue.write(false)
    }
  }

  function leave(because: 'ended' | 'signedOut'): void {
    if (phase.value !== 'signedIn') return
    http.drop()
    live.disconnect()
    board.reset()
    cases.reset()
    people.reset()
    commands.reset()
    unsent.reset()
    user.value = null
    me.value = null
    why.value = because
    phase.value = 'signedOut'
  }

  return { user, me, phase, why, role, house, myRooms, mayDo, signIn, signOut, restore, settled, refreshMe }
})
