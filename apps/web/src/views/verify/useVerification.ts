import type { CallView, ItemView, SecondCheck } from '@bellpull/contracts'
import { isAsHeard, type Heard } from '@bellpull/domain'
import { computed, ref, shallowRef, watch } from 'vue'
import { useCommand } from '@/composables/useCommand'
import { useBoardStore } from '@/stores/board'
import { useClockStore } from '@/stores/clock'
import { useOwnStepsStore } from '@/stores/own-steps'
import { useSessionStore } from '@/stores/session'
import { useTimes } from '@/composables/useTimes'
import { nameOf } from '@/composables/item'
import { useToday } from '@/composables/useToday'
import { checkRows, hasDifference, type Partner } from '@/components/calls/verify/check-rows'
import type { ReadLabel } from '@/components/calls/verify/label'
import { isCovered, METHODS, missingFor, needsTwo, type Method } from '@/components/calls/verify/ready'
import { rememberedChecker, rememberedMethod } from '@/components/calls/verify/remembered'
import { notAsHeard, stopOf, type Stop } from '@/components/calls/verify/stop'

export interface Verified {
  readonly call: CallView
  readonly item: ItemView
}

/**
 * One item between two people and the house: what has been read, looked at and heard, whether it agrees, and
 * what is still missing. The house decides when the command is given.
 */
export function useVerification(now: () => Verified, partners: () => readonly Partner[]) {
  const session = useSessionStore()
  const board = useBoardStore()
  const clock = useClockStore()
  const steps = useOwnStepsStore()
  const command = useCommand()
  const { time } = useTimes()

  const label = shallowRef<ReadLabel | null>(null)
  const looked = ref(false)
  const heard = shallowRef<Heard | null>(null)
  const pin = ref('')
  const methods = computed<Method[]>(() =>
    METHODS.filter((one) => session.house.secondCheckMethods.includes(one)),
  )
  const chosen = rememberedMethod()
  const method = computed<Method>({
    get: () => (methods.value.includes(chosen.value) ? chosen.value : (methods.value[0] ?? 'spoken')),
    set: (to) => {
      chosen.value = to
    },
  })
  const checkerId = rememberedChecker(now().call.caseId, session.user?.id ?? '')

  const item = computed(() => now().item)
  const call = computed(() => now().call)
  const busy = computed(() => command.isBusy(item.value.id))
  const refusal = computed(() => command.refusal(item.value.id))

  const facts = computed(() => ({
    call: call.value,
    item: item.value,
    label: label.value,
    heard: heard.value,
    method: method.value,
  }))
  const stop = computed<Stop | null>(() => {
    const problem = refusal.value?.problem ?? null
    const said = problem && stopOf(problem, facts.value)
    if (said) return said
    const word = heard.value
    if (word === null || !needsTwo(item.value) || method.value !== 'spoken') return null
    const part = { size: item.value.size ?? item.value.label, side: item.value.side }
    return isAsHeard(word, part, call.value.side) ? null : notAsHeard({ ...facts.value, heard: word })
  })
  /** A stop shows both values, so there is nothing to cover any more. */
  const covered = computed(() => stop.value === null && isCovered(facts.value))

  const today = useToday()
  const rowsOf = (hidden: boolean) =>
    checkRows({
      ...now(),
      label: label.value,
      covered: hidden,
      looked: looked.value,
      today: today.value,
      partners: partners(),
      nameOfGtin,
      timeOf: time,
    })
  const rows = computed(() => rowsOf(covered.value))
  const differs = computed(() => hasDifference(rowsOf(false)))
  const missing = computed(() =>
    missingFor({
      ...facts.value,
      differs: differs.value,
      looked: looked.value,
      checkerId: checkerId.value,
      pin: pin.value,
    }),
  )
  const ready = computed(() => missing.value.length === 0 && stop.value === null)

  /** Any package of the board that bears the GTIN says what the product is called. */
  function nameOfGtin(gtin: string): string | null {
    const known = board.rows.find((row) => row.item.unit?.gtin === gtin)
    return known ? nameOf(known.item) : null
  }

  function take(read: ReadLabel): void {
    const before = label.value
    const same =
      before !== null && before.lot === read.lot && before.serial === read.serial && before.gtin === read.gtin
    label.value = read
    heard.value = null
    pin.value = ''
    // A look counts for the package that was looked at.
    if (before !== null && !same) looked.value = false
    command.dismiss(item.value.id)
    if (differs.value) void askHouse(read)
  }

  /**
   * The label is not what was called. The house is asked at once, so that the stop names what was scanned; the
   * command bears no look at the package, so that it cannot verify anything.
   */
  async function askHouse(read: ReadLabel): Promise<void> {
    const given = await command.onItem(item.value, { name: 'verify', ...read.input })
    const problem = refusal.value?.problem
    if (!given.ok && (problem?.code === 'not-intact' || problem?.code === 'not-read-back'))
      command.dismiss(item.value.id)
  }

  const second = (): { secondCheck?: SecondCheck } => {
    const checker = checkerId.value
    if (!needsTwo(item.value) || checker === null) return {}
    if (method.value === 'pin') return { secondCheck: { method: 'pin', checkerId: checker, pin: pin.value } }
    return heard.value === null
      ? {}
      : { secondCheck: { method: 'spoken', checkerId: checker, heard: { ...heard.value } } }
  }

  async function verify(): Promise<void> {
    const read = label.value
    if (read === null || !ready.value || session.user === null) return
    const { id } = item.value
    const given = await command.onItem(item.value, {
      name: 'verify',
      ...read.input,
      intact: true,
      ...second(),
    })
    pin.value = ''
    if (given.ok) steps.note(given.value, [id], session.user.id, clock.nowMs)
  }

  /** Begins again with the label: the next one is covered again. */
  function again(): void {
    label.value = null
    heard.value = null
    pin.value = ''
    command.dismiss(item.value.id)
  }

  /** Keeps what was read; only what was refused is asked for once more. */
  function dismiss(): void {
    pin.value = ''
    command.dismiss(item.value.id)
  }

  watch(method, (to) => {
    heard.value = null
    // What has been seen cannot be heard blind any more.
    if (to === 'spoken') label.value = null
  })
  watch([method, checkerId], () => {
    pin.value = ''
    if (refusal.value?.problem?.code === 'second-checker-needed') command.dismiss(item.value.id)
  })

  return {
    label,
    looked,
    heard,
    pin,
    methods,
    method,
    checkerId,
    rows,
    covered,
    missing,
    ready,
    stop,
    refusal,
    busy,
    take,
    verify,
    again,
    dismiss,
  }
}
