import {
  EVENT_TYPES,
  type EventType,
  type EventView,
  type PersonRef,
  type ProblemCode,
  PROBLEMS,
} from '@bellpull/contracts'
import { UNDOABLE, type UndoableCommand } from '@bellpull/domain'
import { inSentence, nameOf } from '@/composables/item'
import type { Text, TextKey } from '@/composables/useText'

/** What a sentence needs beside the event: names of items and people, times, words. */
export interface Telling {
  readonly t: Text['t']
  readonly itemName: (itemId: string) => string | null
  /** Names of the items of a call, in order. */
  readonly callItems: (callId: string) => readonly string[]
  readonly person: (personId: string) => Pick<PersonRef, 'name'> | null
  readonly time: (instant: string) => string
}

const isKnown = (type: string): type is EventType => (EVENT_TYPES as readonly string[]).includes(type)

/** One event as a sentence that can be read aloud, without its time. */
export function sentenceOf(event: EventView, telling: Telling): string {
  const { t } = telling
  if (!isKnown(event.type)) return t('case.unknownEvent', { who: event.actor.name, type: event.type })
  const item = event.itemId === null ? '' : inSentence(telling.itemName(event.itemId) ?? '')
  const items = itemsOf(event, telling).map(inSentence).join(', ')
  const sentence = t(`case.event.${event.type}` as TextKey, { who: event.actor.name, item, items })
  // A list of items holds commas itself.
  const whole = [sentence, ...detailsOf(event, telling)].join(event.type.startsWith('call.') ? '; ' : ', ')
  return whole.charAt(0).toUpperCase() + whole.slice(1)
}

type Details = (event: EventView, telling: Telling) => (string | null)[]

const text = (value: unknown): string | null => (typeof value === 'string' && value !== '' ? value : null)

interface Line {
  readonly label: string
  readonly variant: string | null
  readonly hold: string | null
}

/** Items as the event of a call bears them; later events of the call look them up. */
function linesOf({ data }: EventView): Line[] {
  const lines: unknown = data['items']
  if (!Array.isArray(lines)) return []
  return lines.map((line: Record<string, unknown>) => ({
    label: text(line['label']) ?? '',
    variant: text(line['variant']),
    hold: text(line['hold']),
  }))
}

function itemsOf(event: EventView, { callItems }: Telling): readonly string[] {
  const lines = linesOf(event)
  if (lines.length > 0) return lines.map(nameOf)
  return event.callId === null ? [] : callItems(event.callId)
}

const lot: Details = ({ data }, { t }) => {
  const found = text(data['lot'])
  return [found === null ? null : t('case.more.lot', { lot: found })]
}
const reason: Details = ({ data }, { t }) => {
  const found = text(data['reason'])
  return [found === null ? null : t('case.more.reason', { reason: reasonWords(found, t) })]
}
const named =
  (member: string, key: 'from' | 'to'): Details =>
  ({ data }, { t, person }) => {
    const id = text(data[member])
    const name = id === null ? null : (person(id)?.name ?? null)
    return [name === null ? null : t(`case.more.${key}`, { name })]
  }
const flag =
  (member: string, key: 'typed' | 'scannedAgain' | 'inspect'): Details =>
  ({ data }, { t }) => [data[member] === true ? t(`case.more.${key}`) : null]
const several =
  (...all: Details[]): Details =>
  (event, telling) =>
    all.flatMap((one) => one(event, telling))

const called: Details = (event, { t, person, time }) => {
  const { data, actor } = event
  const caller = text(data['calledBy'])
  const free = linesOf(event)
    .filter(({ hold }) => hold === 'noneFree')
    .map((line) => inSentence(nameOf(line)))
  const kind = data['kind']
  const neededAt = text(data['neededAt'])
  return [
    kind === 'early' ? t('case.more.kindEarly') : kind === 'standby' ? t('case.more.kindStandby') : null,
    caller !== null && caller !== actor.id && person(caller)
      ? t('case.more.onWordOf', { name: person(caller)?.name ?? '' })
      : null,
    neededAt === null ? null : t('case.more.needed', { time: time(neededAt) }),
    free.length === 0 ? null : t('case.more.noneFree', { items: free.join(', ') }),
  ]
}

const needed: Details = ({ data }, { t, time }) => {
  const at = text(data['neededAt'])
  return [at === null ? null : t('case.more.needed', { time: time(at) })]
}

const second: Details = ({ data }, { t, person }) => {
  const id = text(data['checkedBy'])
  const how = data['method']
  const name = id === null ? null : (person(id)?.name ?? null)
  if (name === null || (how !== 'spoken' && how !== 'pin' && how !== 'touch')) return [null]
  return [t('case.more.second', { name, how: t(`case.how.${how}`) })]
}

const otherPackage: Details = ({ data }, { t }) => [
  text(data['insteadOfUnitId']) === null ? null : t('case.more.otherPackage'),
]
const bin: Details = ({ data }, { t }) => {
  const code = text(data['binCode'])
  return [code === null ? null : t('case.more.toBin', { code })]
}
const toSize: Details = ({ data }, { t }) => {
  const label = text(data['label'])
  if (label === null) return [null]
  return [t('case.more.toSize', { name: inSentence(nameOf({ label, variant: text(data['variant']) })) })]
}
const isUndoable = (value: unknown): value is UndoableCommand =>
  (UNDOABLE as readonly unknown[]).includes(value)
const undone: Details = ({ data }, { t }) => {
  const command = data['command']
  return [isUndoable(command) ? t('case.more.step', { step: t(`case.undone.${command}`) }) : null]
}
const isProblem = (value: unknown): value is ProblemCode =>
  typeof value === 'string' && Object.hasOwn(PROBLEMS, value)
const problem: Details = ({ data }, { t }) => {
  const code = data['problem']
  return [isProblem(code) ? t('case.more.problem', { problem: t(`problem.${code}`) }) : null]
}

/** What more the house recorded with each kind of event. */
const DETAILS: Partial<Record<EventType, Details>> = {
  'call.called': called,
  'call.confirmed': needed,
  'call.cancelled': reason,
  'item.pulled': several(lot, flag('typed', 'typed'), otherPackage),
  'item.delivered': lot,
  'item.verified': several(lot, second, flag('typed', 'typed')),
  'item.opened': several(lot, flag('scannedAgain', 'scannedAgain')),
  'item.openedUnverified': several(lot, reason),
  'item.implanted': lot,
  'item.used': lot,
  'item.notImplanted': several(lot, reason),
  'item.returned': several(lot, flag('inspect', 'inspect'), reason),
  'item.shelved': several(bin, flag('inspect', 'inspect')),
  'item.changed': several(toSize, reason),
  'item.cancelled': reason,
  'item.rejected': several(lot, reason),
  'item.handedOver': named('toPersonId', 'to'),
  'item.taken': named('fromPersonId', 'from'),
  'item.takenOver': named('fromPersonId', 'from'),
  'item.undone': undone,
  'item.heldAgain': lot,
  'item.enteredInError': reason,
  'item.verifyRefused': problem,
  'case.reopened': reason,
  'case.cancelled': reason,
}

function detailsOf(event: EventView, telling: Telling): string[] {
  const details = isKnown(event.type) ? (DETAILS[event.type]?.(event, telling) ?? []) : []
  return details.filter((detail) => detail !== null)
}

const REASONS = ['sizeChanged', 'damaged', 'contaminated', 'defect', 'other'] as const

/** A reason as the house keeps it, "sizeChanged: words of one's own", in words. */
export function reasonWords(kept: string, t: Text['t']): string {
  const [code = '', ...rest] = kept.split(': ')
  const known = REASONS.find((one) => one === code)
  if (known === undefined) return kept
  return [inSentence(t(`common.notImplantedReason.${known}`)), ...rest].join(': ')
}
