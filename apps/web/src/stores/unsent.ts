import { makeCall, type CallView, type MakeCall } from '@bellpull/contracts'
import { defineStore } from 'pinia'
import { shallowReactive } from 'vue'
import { z } from 'zod'
import { callsApi } from '@/api/calls'
import { ApiProblem, NotSent } from '@/api/problem'
import { newTap, type Tap } from '@/api/tap'
import type { Given } from './commands'

/** A call that was made while the line was away. It is shown, and goes only when a person confirms it again. */
export interface UnsentCall {
  readonly tap: Tap
  readonly caseId: string
  readonly call: MakeCall
  readonly madeAtMs: number
  readonly why: NotSent
}

/** Where the calls wait on this device, so that loading the page again loses none. */
const PLACE = 'bellpull.unsent-calls'
const written = z.array(
  z.object({ key: z.string(), caseId: z.string(), call: makeCall, madeAtMs: z.number() }),
)

function readKept(): [string, UnsentCall][] {
  try {
    return written
      .parse(JSON.parse(sessionStorage.getItem(PLACE) ?? '[]'))
      .map(({ key, ...one }) => [key, { ...one, tap: { key }, why: new NotSent('offline') }])
  } catch {
    // What is there was written by another release, or the browser keeps nothing.
    return []
  }
}

/** Making calls: what could not be sent is kept here, never replayed by itself. */
export const useUnsentStore = defineStore('unsent', () => {
  const kept = shallowReactive(new Map(readKept()))
  const running = shallowReactive(new Map<string, Promise<Given<CallView>>>())

  function write(): void {
    const calls = [...kept.values()].map(({ tap, caseId, call, madeAtMs }) => ({
      key: tap.key,
      caseId,
      call,
      madeAtMs,
    }))
    try {
      sessionStorage.setItem(PLACE, JSON.stringify(calls))
    } catch {
      // Full, or switched off: then it is kept as long as the page is.
    }
  }
  function keep(one: UnsentCall): void {
    kept.set(one.tap.key, one)
    write()
  }
  function forget(key: string): void {
    kept.delete(key)
    write()
  }

  const ofCase = (caseId: string): UnsentCall[] => [...kept.values()].filter((one) => one.caseId === caseId)
  const isBusy = (caseId: string): boolean => running.has(caseId)

  /**
   * A call from the tablet. While one of the same case is on its way, a second tap is the first one again; the
   * same call made anew confirms the one that is kept.
   */
  function make(caseId: string, call: MakeCall): Promise<Given<CallView>> {
    const content = JSON.stringify(call)
    const same = ofCase(caseId).find((one) => JSON.stringify(one.call) === content)
    return same ? sendAgain(same) : (running.get(caseId) ?? send(caseId, call, newTap(), Date.now()))
  }

  /** A person has confirmed it: the same tap again, so that it counts once even if the first one arrived. */
  function sendAgain({ tap, caseId, call, madeAtMs }: UnsentCall): Promise<Given<CallView>> {
    return running.get(caseId) ?? send(caseId, call, tap, madeAtMs)
  }

  function send(caseId: string, call: MakeCall, tap: Tap, madeAtMs: number): Promise<Given<CallView>> {
    const given = callsApi.make(caseId, call, tap).then(
      (value): Given<CallView> => {
        forget(tap.key)
        return { ok: true, value }
      },
      (error: unknown): Given<CallView> => {
        if (error instanceof NotSent) keep({ tap, caseId, call, madeAtMs, why: error })
        else if (!(error instanceof ApiProblem)) throw error
        return { ok: false, why: error }
      },
    )
    running.set(caseId, given)
    const finish = (): void => void running.delete(caseId)
    given.then(finish, finish)
    return given
  }

  const discard = (one: UnsentCall): void => forget(one.tap.key)

  /** Another person may follow on this device; what the room has called still waits for somebody's word. */
  function reset(): void {
    running.clear()
  }

  return { ofCase, isBusy, make, sendAgain, discard, reset }
})
