import type { CallView, ItemView } from '@bellpull/contracts'

export interface CallGroup {
  readonly call: CallView
  /** What has no outcome comes first. */
  readonly items: readonly ItemView[]
  readonly unsettled: number
}

const isUnsettled = (item: ItemView): boolean => item.outcome === null

/** Items grouped by call: calls with something unsettled first, then the newest. */
export function groupsOf(calls: readonly CallView[]): CallGroup[] {
  return calls
    .map((call) => ({
      call,
      items: [...call.items].sort((a, b) => Number(isUnsettled(b)) - Number(isUnsettled(a))),
      unsettled: call.items.filter(isUnsettled).length,
    }))
    .sort(
      (a, b) =>
        Number(b.unsettled > 0) - Number(a.unsettled > 0) || b.call.calledAt.localeCompare(a.call.calledAt),
    )
}

export interface CaseItem {
  readonly call: CallView
  readonly item: ItemView
}

const inOrder = (calls: readonly CallView[]): CaseItem[] =>
  [...calls]
    .sort((a, b) => a.calledAt.localeCompare(b.calledAt))
    .flatMap((call) => call.items.map((item) => ({ call, item })))

export const unsettledOf = (calls: readonly CallView[]): CaseItem[] =>
  inOrder(calls).filter(({ item }) => isUnsettled(item))

/** Packages that stay with the patient. */
export const implantedOf = (calls: readonly CallView[]): CaseItem[] =>
  inOrder(calls).filter(({ item }) => item.outcome === 'implanted')
