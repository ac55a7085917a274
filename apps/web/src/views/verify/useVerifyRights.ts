import type { CallView, ItemView } from '@bellpull/contracts'
import { callCommandPermission, commandsFor, may } from '@bellpull/domain'
import { computed } from 'vue'
import type { StopAction } from '@/components/calls/verify/stop'
import { stateOf } from '@/composables/item'
import { useSessionStore } from '@/stores/session'

/** What this person may do beside verifying: read the call back, put the package back, call another. */
export function useVerifyRights(now: () => { call: CallView; item: ItemView }, isCalledAgain: () => boolean) {
  const session = useSessionStore()

  const mayReadBack = computed(() => {
    const { call } = now()
    return (
      session.user !== null &&
      call.readBack === null &&
      call.calledBy.id !== session.user.id &&
      callCommandPermission('readBack', session.user.role).ok
    )
  })
  const mayPutBack = computed(
    () => session.role !== null && commandsFor(stateOf(now().item), session.role).includes('putBack'),
  )
  const mayCall = computed(
    () => session.role !== null && may(session.role, 'call.make') && now().item.catalogueItemId !== null,
  )
  /** Of the actions of a stop, those that this person may take. */
  const offered = computed<StopAction[]>(() => [
    'scanAgain',
    'readAgain',
    'pinAgain',
    'goBack',
    ...(mayReadBack.value ? (['readBack'] as const) : []),
    ...(mayCall.value && !isCalledAgain() ? (['callAnother'] as const) : []),
    ...(mayPutBack.value ? (['putBack'] as const) : []),
  ])

  return { mayReadBack, mayPutBack, offered }
}
