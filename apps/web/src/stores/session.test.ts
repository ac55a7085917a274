import type { MeView, SignedInUser } from '@bellpull/contracts'
import { createPinia, setActivePinia } from 'pinia'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { aCall, id } from '../../test/views'
import { http } from '@/api/http'
import { ApiProblem, NotSent } from '@/api/problem'
import { sessionApi } from '@/api/session'
import { useBoardStore } from './board'
import { useClockStore } from './clock'
import { useLiveStore } from './live'
import { useSessionStore } from './session'

const USER: SignedInUser = { id: id(1), name: 'Wren Abernoth', initials: 'WA', role: 'circulator' }
const ME: MeView = {
  ...USER,
  house: { zone: 'UTC', today: '2032-05-12', sizingArithmetic: true, secondCheckMethods: ['spoken'] },
  rooms: [
    { id: id(103), number: 3 },
    { id: id(107), number: 7 },
  ],
}
const SESSION = { accessToken: 'token', expiresInS: 900, user: USER }

/** A session whose line to the house is left out: only what is asked of it is seen. */
function aSession() {
  setActivePinia(createPinia())
  const live = useLiveStore()
  let sayEnded: () => void = () => undefined
  const connect = vi.spyOn(live, 'connect').mockImplementation((ended) => {
    sayEnded = ended
  })
  const disconnect = vi.spyOn(live, 'disconnect').mockImplementation(() => undefined)
  return { session: useSessionStore(), connect, disconnect, sayEnded: () => sayEnded() }
}

beforeEach(() => {
  localStorage.clear()
  vi.spyOn(http, 'get').mockResolvedValue([])
  vi.spyOn(sessionApi, 'me').mockResolvedValue(ME)
  vi.spyOn(sessionApi, 'signOut').mockResolvedValue(undefined)
})
afterEach(() => {
  useClockStore().stop()
  vi.restoreAllMocks()
})

describe('when the application starts', () => {
  test.each([
    { what: 'a live session is opened', answer: () => Promise.resolve(SESSION), phase: 'signedIn' },
    {
      what: 'without one, the sign-in page is due, and nobody is told that they were signed out',
      answer: () => Promise.reject(new ApiProblem('not-signed-in', 401)),
      phase: 'signedOut',
    },
    {
      what: 'without a line, nobody knows yet',
      answer: () => Promise.reject(new NotSent('offline')),
      phase: 'away',
    },
    {
      what: 'while the house cannot reach its records, nobody knows yet',
      answer: () => Promise.reject(new ApiProblem('unavailable', 503)),
      phase: 'away',
    },
  ])('$what', async ({ answer, phase }) => {
    vi.spyOn(sessionApi, 'restore').mockImplementation(answer)
    const { session, connect } = aSession()
    await session.restore()
    expect([session.phase, session.why]).toEqual([phase, null])
    expect(connect).toHaveBeenCalledTimes(phase === 'signedIn' ? 1 : 0)
  })

  test('whoever waits to know is told as soon as the line is back, and the house is asked once for all', async () => {
    const restore = vi.spyOn(sessionApi, 'restore').mockRejectedValueOnce(new NotSent('offline'))
    const { session } = aSession()
    const known = Promise.all([session.settled(), session.settled()])
    await vi.waitFor(() => expect(session.phase).toBe('away'))
    expect(restore).toHaveBeenCalledTimes(1)
    restore.mockResolvedValueOnce(SESSION)
    await session.restore()
    await known
    expect(session.user).toEqual(USER)
  })
})

describe('signed in', () => {
  async function signedIn() {
    vi.spyOn(sessionApi, 'signIn').mockResolvedValue(SESSION)
    const all = aSession()
    await all.session.signIn('wren@larchwater.example', 'linen-brass-cord')
    return all
  }

  test('the person, their rooms, the house and what they may do are known', async () => {
    const { session } = await signedIn()
    expect([session.role, session.myRooms, session.house.today]).toEqual(['circulator', [3, 7], '2032-05-12'])
    expect([session.mayDo('call.make'), session.mayDo('turnaround.read')]).toEqual([true, false])
  })

  test('the house ends the session: everything that was on screen is forgotten, and the page says why', async () => {
    const { session, sayEnded, disconnect } = await signedIn()
    const board = useBoardStore()
    board.byId.set(id(1), aCall())
    sayEnded()
    expect([session.phase, session.why, session.user, session.myRooms]).toEqual([
      'signedOut',
      'ended',
      null,
      [],
    ])
    expect(board.calls).toEqual([])
    expect(disconnect).toHaveBeenCalled()
  })

  test('signing out tells the house, and works without a line too', async () => {
    const { session } = await signedIn()
    vi.mocked(sessionApi.signOut).mockRejectedValueOnce(new NotSent('offline'))
    await session.signOut()
    expect(sessionApi.signOut).toHaveBeenCalledTimes(1)
    expect([session.phase, session.why]).toEqual(['signedOut', 'signedOut'])
  })

  test('whoever signed out without a line is not let in by their cookie; the house is told first', async () => {
    const { session } = await signedIn()
    vi.mocked(sessionApi.signOut).mockRejectedValueOnce(new NotSent('offline'))
    await session.signOut()

    const restore = vi.spyOn(sessionApi, 'restore').mockResolvedValue(SESSION)
    const later = aSession().session
    await later.restore()
    expect([later.phase, restore.mock.calls.length]).toEqual(['signedOut', 0])
    expect(sessionApi.signOut).toHaveBeenCalledTimes(2)
    const afterThat = aSession().session
    await afterThat.restore()
    expect(afterThat.phase).toBe('signedIn')
  })

  test('a refused sign-in leaves nobody signed in', async () => {
    vi.spyOn(sessionApi, 'signIn').mockRejectedValue(new ApiProblem('wrong-credentials', 401))
    const { session } = aSession()
    await expect(session.signIn('a@b.example', 'x')).rejects.toMatchObject({ code: 'wrong-credentials' })
    expect([session.user, session.role]).toEqual([null, null])
  })
})
