import type {
  CallCommandBody,
  CallView,
  CaseCommand,
  CaseView,
  ItemCommandBody,
  ItemView,
} from '@bellpull/contracts'
import { callsApi } from '@/api/calls'
import { casesApi } from '@/api/cases'
import { NotSent, type ApiProblem } from '@/api/problem'
import { useCasesStore } from '@/stores/cases'
import { useCommandsStore, type Given } from '@/stores/commands'
import { useText } from './useText'

type WithoutVersion<T> = T extends unknown ? Omit<T, 'expectedVersion'> : never
/** What a screen gives; the version that it saw is put in here. */
export type ItemCommand = WithoutVersion<ItemCommandBody>
export type CallCommand = WithoutVersion<CallCommandBody>
export type CaseStep = WithoutVersion<CaseCommand>

export interface Refusal {
  /** Plain words that say what to do. */
  readonly text: string
  readonly notSent: boolean
  /** The house's refusal with its members (`expected`, `scanned`, ...); `null` when nothing was sent. */
  readonly problem: ApiProblem | null
}

/**
 * Commands from a screen. The board itself changes by delta only; the answer says whether the tap was refused.
 * Busy state and refusal are kept by target id, so that every place that shows the target says the same.
 */
export function useCommand() {
  const commands = useCommandsStore()
  const cases = useCasesStore()
  const { wordsFor } = useRefusals()

  function onItem(item: ItemView, command: ItemCommand): Promise<Given<CallView>> {
    const body = { ...command, expectedVersion: item.version } as ItemCommandBody
    return commands.give(item.id, body, (tap) => callsApi.onItem(item.id, body, tap))
  }

  function onCall(call: CallView, command: CallCommand): Promise<Given<CallView>> {
    const body = { ...command, expectedVersion: call.version } as CallCommandBody
    return commands.give(call.id, body, (tap) => callsApi.onCall(call.id, body, tap))
  }

  async function onCase(one: CaseView, step: CaseStep): Promise<Given<CaseView>> {
    const body: CaseCommand = { ...step, expectedVersion: one.version }
    const given = await commands.give(one.id, body, (tap) => casesApi.command(one.id, body, tap))
    if (given.ok) cases.put(given.value)
    return given
  }

  /** A tap on this item, call or case is on its way: its buttons are off. */
  const isBusy = (id: string): boolean => commands.isBusy(id)

  /** Why the last tap on this item, call or case did nothing; gone with the next tap or `dismiss`. */
  function refusal(id: string): Refusal | null {
    const why = commands.refusalOf(id)
    return why === null ? null : wordsFor(why)
  }

  return { onItem, onCall, onCase, isBusy, refusal, dismiss: commands.dismiss }
}

/** Refusals in plain words, for what does not go through `useCommand`. */
export function useRefusals() {
  const { t } = useText()
  function wordsFor(why: ApiProblem | NotSent): Refusal {
    if (why instanceof NotSent)
      return { text: t(`common.notSent.${why.reason}`), notSent: true, problem: null }
    return { text: t(`problem.${why.code}`), notSent: false, problem: why }
  }
  return { wordsFor }
}
