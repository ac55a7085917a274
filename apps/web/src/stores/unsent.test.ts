import { createPinia, setActivePinia } from 'pinia'
import type { MakeCall } from '@bellpull/contracts'
import { beforeEach, expect, test, vi } from 'vitest'
import { callsApi } from '@/api/calls'
import { ApiProblem, NotSent } from '@/api/problem'
import { aCall, id } from '../../test/views'
import { useUnsentStore } from './unsent'

const CASE = id(301)
const call: MakeCall = {
  kind: 'early',
  neededInMinutes: 10,
  calledBy: id(901),
  side: 'left',
  items: [{ catalogueItemId: id(501), quantity: 1 }],
}
const make = vi.spyOn(callsApi, 'make')
/** The page is loaded again: every store is new, the browser's storage is not. */
const reload = () => {
  setActivePinia(createPinia())
  return useUnsentStore()
}
const keysSent = (): string[] => make.mock.calls.map(([, , tap]) => tap.key)

beforeEach(() => {
  sessionStorage.clear()
  make.mockReset()
})

test('what was not sent is there after the page is loaded again, and goes with the same key', async () => {
  make.mockRejectedValueOnce(new NotSent('offline'))
  await reload().make(CASE, call)

  const store = reload()
  expect(store.ofCase(CASE)).toMatchObject([{ caseId: CASE, call }])
  expect(make).toHaveBeenCalledTimes(1)

  make.mockResolvedValueOnce(aCall())
  await store.sendAgain(store.ofCase(CASE)[0]!)
  expect(new Set(keysSent()).size).toBe(1)
  expect(reload().ofCase(CASE)).toEqual([])
})

test.each([
  { what: 'a person drops it', left: 0 },
  { what: 'the house refuses it: a person still has to see that', left: 1 },
])('$what', async ({ left }) => {
  make.mockRejectedValueOnce(new NotSent('deadline'))
  const store = reload()
  await store.make(CASE, call)
  if (left === 0) store.discard(store.ofCase(CASE)[0]!)
  else {
    make.mockRejectedValueOnce(new ApiProblem('case-closed', 409))
    await store.sendAgain(store.ofCase(CASE)[0]!)
  }
  expect(reload().ofCase(CASE)).toHaveLength(left)
})

test('a call that the house refuses at once does not wait', async () => {
  make.mockRejectedValueOnce(new ApiProblem('case-closed', 409))
  await reload().make(CASE, call)
  expect(reload().ofCase(CASE)).toEqual([])
})

test('storage that cannot be read loses nothing but itself', () => {
  sessionStorage.setItem('bellpull.unsent-calls', '{')
  expect(reload().ofCase(CASE)).toEqual([])
})
