import { defineStore } from 'pinia'
import { shallowReactive } from 'vue'
import { ApiProblem, NotSent } from '@/api/problem'
import { newTap, type Tap } from '@/api/tap'

/** What became of a tap. */
export type Given<T> =
  { readonly ok: true; readonly value: T } | { readonly ok: false; readonly why: ApiProblem | NotSent }

/**
 * Taps on their way, one at a time for each target (an item, a call, a case). A second tap meanwhile is the
 * first one again; a tap that was not sent keeps its key until it is sent or something else is tapped.
 */
export const useCommandsStore = defineStore('commands', () => {
  const running = shallowReactive(new Map<string, Promise<Given<unknown>>>())
  const refused = shallowReactive(new Map<string, ApiProblem | NotSent>())
  const unsent = new Map<string, { content: string; tap: Tap }>()

  /** @param content what is sent; the same content again is the same tap. */
  function give<T>(target: string, content: unknown, send: (tap: Tap) => Promise<T>): Promise<Given<T>> {
    const already = running.get(target)
    if (already !== undefined) return already as Promise<Given<T>>
    const tap = tapFor(target, JSON.stringify(content))
    refused.delete(target)
    const given = send(tap).then(
      (value): Given<T> => {
        unsent.delete(target)
        return { ok: true, value }
      },
      (error: unknown): Given<T> => {
        if (!(error instanceof NotSent)) unsent.delete(target)
        if (!(error instanceof ApiProblem || error instanceof NotSent)) throw error
        refused.set(target, error)
        return { ok: false, why: error }
      },
    )
    running.set(target, given)
    const finish = (): void => void running.delete(target)
    given.then(finish, finish)
    return given
  }

  function tapFor(target: string, content: string): Tap {
    const kept = unsent.get(target)
    const tap = kept?.content === content ? kept.tap : newTap()
    unsent.set(target, { content, tap })
    return tap
  }

  const isBusy = (target: string): boolean => running.has(target)
  const refusalOf = (target: string): ApiProblem | NotSent | null => refused.get(target) ?? null
  const dismiss = (target: string): void => void refused.delete(target)

  function reset(): void {
    running.clear()
    refused.clear()
    unsent.clear()
  }

  return { give, isBusy, refusalOf, dismiss, reset }
})
