import type { CallView, ItemView, LabelView, Scan, TypedLabel } from '@bellpull/contracts'
import { ref, shallowRef } from 'vue'
import { labelsApi } from '@/api/labels'
import { ApiProblem, NotSent } from '@/api/problem'
import type { useBoardActions } from '../dispatch/useBoardActions'
import { nameOf } from '@/composables/item'
import { useRefusals } from '@/composables/useCommand'
import { useText } from '@/composables/useText'
import { useTimes } from '@/composables/useTimes'
import type { FetchLine, FetchList } from '@/components/stock/fetch/fetch-list'
import type { ScanResult } from '@/components/stock/fetch/scan-result'
import { isBin } from '@/components/stock/fetch/put-back'
import { differences } from '@/components/stock/fetch/refusal-words'
import { matchScan } from '@/components/stock/fetch/scan-match'
import { joinBarcodes, type Reading, type ScanStep } from '@/components/stock/fetch/two-barcodes'

type Actions = Pick<ReturnType<typeof useBoardActions>, 'give' | 'send'>

/** Scans on To fetch, one after the other: read, find what the package is for, mark it pulled, say what now. */
export function useScanning(list: () => FetchList, actions: Actions) {
  const { t } = useText()
  const { day } = useTimes()
  const { wordsFor } = useRefusals()
  const result = shallowRef<ScanResult>(idle())
  /** First barcode of a label whose second is awaited. */
  const waiting = ref<string | null>(null)
  /** The package that goes back: its bin comes next. */
  const goingBack = ref<string | null>(null)
  let queue: Promise<void> = Promise.resolve()

  function idle(): ScanResult {
    return { tone: 'idle', what: '', now: t('fetch.result.idle'), facts: [], goOn: null }
  }
  function show(tone: ScanResult['tone'], what: string, now = '', facts: readonly string[] = []): void {
    result.value = { tone, what, now, facts, goOn: null }
  }

  /** Takes a scan. Scans that come faster than the line carries them are done in their order. */
  function scan(scanned: Scan): Promise<void> {
    queue = queue.then(() => take(scanned)).catch(fail)
    return queue
  }

  function fail(error: unknown): void {
    if (error instanceof NotSent) show('stop', t('fetch.result.notSent'), t('fetch.result.notSentNext'))
    else if (error instanceof ApiProblem) show('stop', t('fetch.result.unreadable'), wordsFor(error).text)
    else throw error
  }

  async function take(scanned: Scan): Promise<void> {
    if (typeof scanned === 'string' && (await takeBin(scanned))) return
    show('busy', '', t('fetch.result.reading'))
    const step: ScanStep =
      typeof scanned === 'string' ? await joinBarcodes(scanned, waiting.value, read) : await readPair(scanned)
    waiting.value = step.kind === 'half' || step.kind === 'same' ? step.first : null
    switch (step.kind) {
      case 'label':
        return found(step.scan, step.label, step.setAside !== null)
      case 'same':
        return show('ask', t('fetch.result.half'), t('fetch.result.same'))
      case 'half':
        return askForOther(step)
      case 'unreadable':
        return show('stop', t('fetch.result.unreadable'), step.detail)
    }
  }

  async function read(scanned: Scan): Promise<Reading> {
    try {
      return { ok: true, label: await labelsApi.parse(scanned) }
    } catch (error) {
      if (!(error instanceof ApiProblem && error.code === 'label-unreadable')) throw error
      return {
        ok: false,
        reason: String(error.members['reason'] ?? ''),
        detail: error.detail ?? wordsFor(error).text,
      }
    }
  }

  async function readPair(pair: Exclude<Scan, string>): Promise<ScanStep> {
    const reading = await read(pair)
    return reading.ok
      ? { kind: 'label', scan: pair, label: reading.label, setAside: null }
      : { kind: 'unreadable', reason: reading.reason, detail: reading.detail }
  }

  function askForOther({ first, missing, label }: Extract<ScanStep, { kind: 'half' }>): void {
    const now = t(missing === 'product' ? 'fetch.result.halfNoProduct' : 'fetch.result.halfNoLot')
    const goOn = (): void => {
      waiting.value = null
      if (label) queue = queue.then(() => found(first, label, false)).catch(fail)
    }
    result.value = { tone: 'ask', what: t('fetch.result.half'), now, facts: [], goOn: label ? goOn : null }
  }

  async function found(scanned: Scan, label: LabelView, setAside: boolean): Promise<void> {
    goingBack.value = null
    const match = matchScan(label, list())
    const facts = setAside ? [t('fetch.result.setAside')] : []
    switch (match.kind) {
      case 'pull': {
        if (match.others.length > 0) facts.push(t('fetch.result.others', { n: match.others.length + 1 }))
        return void (await pull(match.line, { scan: scanned }, facts))
      }
      case 'pulledAlready':
        return show(
          'ask',
          t('fetch.result.pulledAlready', named(match.line)),
          t('fetch.result.pulledAlreadyNext'),
          facts,
        )
      case 'putBack': {
        const { putBack } = match.line.item
        goingBack.value = match.line.item.id
        const next = putBack?.inspect ? 'fetch.result.inspectNext' : 'fetch.result.putBackNext'
        return show(
          'ask',
          t('fetch.result.putBack', { ...named(match.line), code: putBack?.toCode ?? '' }),
          t(next),
          facts,
        )
      }
      case 'notOnTheList':
        return show(
          'stop',
          t('fetch.result.notOnTheList'),
          t('fetch.result.notOnTheListNext', { product: productOf(label) }),
          facts,
        )
    }
  }

  const named = ({ call, item }: FetchLine) => ({ item: nameOf(item), room: call.room.number })

  function productOf(label: LabelView): string {
    if (label.gtin !== undefined) return t('fetch.product.gtin', { gtin: label.gtin })
    return label.product === undefined
      ? t('fetch.result.thisProduct')
      : t('fetch.product.hibc', { product: label.product })
  }

  /** Marks a line pulled by what was scanned or typed. @returns why not, or `null` when it is pulled. */
  async function pull(
    line: FetchLine,
    by: { scan: Scan } | { typed: TypedLabel },
    facts: readonly string[] = [],
  ): Promise<string | null> {
    const given = await actions.give(line.item, { name: 'pull', ...by })
    if (!given.ok) {
      const { text, notSent, problem } = wordsFor(given.why)
      if (notSent) show('stop', t('fetch.result.notSent'), t('fetch.result.notSentNext'))
      else show('stop', t('fetch.result.refused', named(line)), text, differences(problem, t, day))
      return text
    }
    sayPulled(line, given.value, [...facts, ...('typed' in by ? [t('fetch.result.typed')] : [])])
    return null
  }

  function sayPulled(line: FetchLine, answer: CallView, facts: readonly string[]): void {
    const after = answer.items.find(({ id }) => id === line.item.id) ?? line.item
    const exchanged = after.unit !== null && after.unit.id !== line.item.unit?.id
    const now =
      after.stage === 'inRoom'
        ? t('fetch.result.inRoom', { room: line.call.room.number })
        : t('fetch.result.toHatch')
    show('done', t('fetch.result.pulled', named(line)), now, [
      ...facts,
      ...(exchanged ? [t('fetch.result.otherPackage')] : []),
    ])
  }

  /** A bin's own code: the end of a put-back whose package was scanned before. @returns whether it was one. */
  async function takeBin(scanned: string): Promise<boolean> {
    const { putBacks } = list()
    const here = putBacks.filter(({ item }) => isBin(scanned, item.putBack?.toCode ?? ''))
    const armed = putBacks.find(({ item }) => item.id === goingBack.value)
    const line = here.find(({ item }) => item.id === goingBack.value)
    if (line && !line.item.putBack?.inspect) {
      await shelve(line.item, { binCode: line.item.putBack?.toCode ?? '' })
      return true
    }
    const other = here[0]
    if (other) {
      show(
        'ask',
        t('fetch.result.shelveFirst', { code: other.item.putBack?.toCode ?? '', item: nameOf(other.item) }),
      )
      return true
    }
    if (armed && /^\s*[A-Za-z]{1,3}[-\w]{1,8}\s*$/.test(scanned)) {
      show(
        'stop',
        t('fetch.shelve.notThis', { given: scanned.trim(), code: armed.item.putBack?.toCode ?? '' }),
      )
      return true
    }
    return false
  }

  /** Back in its bin, or set aside. */
  async function shelve(item: ItemView, how: { binCode: string } | { inspect: true }): Promise<boolean> {
    const given = await actions.give(item, { name: 'shelve', ...how })
    goingBack.value = null
    if (!given.ok) {
      const { text, problem } = wordsFor(given.why)
      show('stop', t('fetch.shelve.title', { item: nameOf(item) }), problem?.detail ?? text)
      return false
    }
    const setAside = 'inspect' in how || item.putBack?.inspect === true
    if (setAside)
      show('done', t('fetch.result.inspected', { item: nameOf(item) }), t('fetch.result.inspectedNext'))
    else
      show(
        'done',
        t('fetch.result.shelved', { item: nameOf(item), code: item.putBack?.toCode ?? '' }),
        t('fetch.result.shelvedNext'),
      )
    return true
  }

  /** What was done by a button, in the same place as what a scan does. */
  async function undo({ call, item }: FetchLine): Promise<void> {
    const given = await actions.give(item, { name: 'undo' })
    if (!given.ok) return show('stop', nameOf(item), wordsFor(given.why).text)
    const after = given.value.items.find(({ id }) => id === item.id)
    const code = after?.unit?.location.code
    show(
      'done',
      t('fetch.result.undone', { item: nameOf(item), room: call.room.number }),
      code ? t('fetch.result.undoneNext', { code }) : '',
    )
  }

  function forget(): void {
    waiting.value = null
    goingBack.value = null
    result.value = idle()
  }

  return { result, waiting, goingBack, scan, pull, shelve, undo, forget }
}
