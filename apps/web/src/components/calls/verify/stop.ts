import type { CallView, ItemView, ProblemCode } from '@bellpull/contracts'
import type { Heard, Side } from '@bellpull/domain'
import { nameOf } from '@/composables/item'
import { dayText } from '@/composables/times'
import type { ReadLabel } from './label'

/** What can be done about a hard stop; the first is the next thing to do. */
export const STOP_ACTIONS = [
  'scanAgain',
  'readAgain',
  'pinAgain',
  'goBack',
  'readBack',
  'callAnother',
  'putBack',
] as const
export type StopAction = (typeof STOP_ACTIONS)[number]

/** Refusals that are said as a hard stop, and what is offered for each. */
const OFFERS = {
  'wrong-item': ['scanAgain', 'callAnother', 'putBack'],
  'wrong-side': ['scanAgain', 'callAnother', 'putBack'],
  'not-the-pulled-unit': ['scanAgain', 'callAnother', 'putBack'],
  'label-differs': ['callAnother', 'scanAgain', 'putBack'],
  'unit-expired': ['callAnother', 'putBack'],
  'unit-quarantined': ['callAnother', 'putBack'],
  'unit-recalled': ['callAnother', 'putBack'],
  'unit-not-sterile': ['callAnother', 'putBack'],
  'unit-not-in-stock': ['callAnother', 'putBack'],
  'pair-mismatch': ['callAnother', 'putBack'],
  'not-as-heard': ['readAgain', 'putBack'],
  'wrong-pin': ['pinAgain'],
  'second-checker-needed': ['goBack'],
  'not-intact': ['goBack'],
  'not-read-back': ['readBack'],
  'label-unreadable': ['scanAgain'],
} as const satisfies Partial<Record<ProblemCode, readonly StopAction[]>>
export type StopRule = keyof typeof OFFERS

export const isStopRule = (code: ProblemCode): code is StopRule => Object.hasOwn(OFFERS, code)

type In = 'called' | 'pulled' | 'record' | 'today' | 'label'
type Found = 'label' | 'package' | 'heard'

/** One of the two values of a stop, ready for words. */
export type Value =
  | { readonly is: 'product'; readonly name: string; readonly ref: string | null; readonly side: Side | null }
  | { readonly is: 'unknownGtin'; readonly gtin: string }
  | { readonly is: 'unknownRef'; readonly ref: string }
  | { readonly is: 'package'; readonly lot: string | null; readonly serial: string | null }
  | { readonly is: 'useBy'; readonly day: string }
  | { readonly is: 'day'; readonly day: string }
  | { readonly is: 'heard'; readonly size: string; readonly side: Side }
  | { readonly is: 'usable' }
  | { readonly is: 'state'; readonly rule: Unusable; readonly lot: string }

type Unusable = 'unit-quarantined' | 'unit-recalled' | 'unit-not-sterile' | 'unit-not-in-stock'

export interface Stop {
  readonly rule: StopRule
  readonly expected: { readonly where: In; readonly value: Value } | null
  readonly found: { readonly where: Found; readonly value: Value } | null
  readonly actions: readonly StopAction[]
  /** One more sentence of the house, where it has one. */
  readonly detail: string | null
}

interface Facts {
  readonly call: CallView
  readonly item: ItemView
  readonly label: ReadLabel | null
  readonly heard: Heard | null
}

/** A refusal of the house: its code, and what it bears beside. */
export interface Refused {
  readonly code: ProblemCode
  readonly members: Readonly<Record<string, unknown>>
  readonly detail: string | null
}

/** A refusal of the house as a hard stop: the rule, both values and what to do; `null` for any other refusal. */
export function stopOf(problem: Refused, facts: Facts): Stop | null {
  if (!isStopRule(problem.code)) return null
  const detail = ['label-unreadable', 'second-checker-needed'].includes(problem.code) ? problem.detail : null
  return {
    rule: problem.code,
    ...valuesOf(problem, problem.code, facts),
    actions: OFFERS[problem.code],
    detail,
  }
}

/** What was heard is not on the label: said before anything is sent. */
export const notAsHeard = (facts: Facts & { heard: Heard }): Stop => ({
  rule: 'not-as-heard',
  ...heardValues(facts),
  actions: OFFERS['not-as-heard'],
  detail: null,
})

type Values = Pick<Stop, 'expected' | 'found'>

function valuesOf({ members }: Refused, rule: StopRule, facts: Facts): Values {
  const { item, label } = facts
  switch (rule) {
    case 'wrong-item':
    case 'wrong-side':
    case 'pair-mismatch':
      return {
        expected: { where: 'called', value: productValue(members['expected']) ?? ownProduct(item) },
        found: found('label', productValue(members['scanned'])),
      }
    case 'not-the-pulled-unit':
      return {
        expected: { where: 'pulled', value: packageValue(members['expected']) ?? ownPackage(item) },
        found: found('label', packageValue(members['scanned']) ?? (label && ownLabel(label))),
      }
    case 'label-differs':
      return {
        expected: found('record', dayValue('useBy', members['expected'])),
        found: found('label', dayValue('useBy', members['scanned'])),
      }
    case 'unit-expired':
      return expiredValues(members, facts)
    case 'unit-quarantined':
    case 'unit-recalled':
    case 'unit-not-sterile':
    case 'unit-not-in-stock': {
      const lot = item.unit?.lot ?? label?.lot ?? '?'
      return {
        expected: { where: 'called', value: { is: 'usable' } },
        found: { where: 'package', value: { is: 'state', rule, lot } },
      }
    }
    case 'not-as-heard':
      return heardValues(facts)
    default:
      return { expected: null, found: null }
  }
}

function expiredValues(members: Refused['members'], { item, label }: Facts): Values {
  const today = text(members['today'])
  const useBy = text(members['useByOn']) ?? label?.useByOn ?? item.unit?.useByOn ?? null
  return {
    expected: today === null ? null : { where: 'today', value: { is: 'day', day: dayText(today) } },
    found: useBy === null ? null : { where: 'label', value: { is: 'useBy', day: dayText(useBy) } },
  }
}

const heardValues = ({ item, heard }: Facts): Values => ({
  expected: { where: 'label', value: { is: 'heard', size: item.size ?? item.label, side: item.side } },
  found: heard === null ? null : { where: 'heard', value: { is: 'heard', ...heard } },
})

const found = <W extends string>(where: W, value: Value | null) => (value === null ? null : { where, value })

const text = (value: unknown): string | null => (typeof value === 'string' && value !== '' ? value : null)
const record = (value: unknown): Readonly<Record<string, unknown>> =>
  typeof value === 'object' && value !== null ? (value as Record<string, unknown>) : {}

const ownProduct = (item: ItemView): Value => ({
  is: 'product',
  name: nameOf(item),
  ref: item.ref,
  side: item.side,
})
const ownPackage = ({ unit }: ItemView): Value => ({
  is: 'package',
  lot: unit?.lot ?? null,
  serial: unit?.serial ?? null,
})
const ownLabel = ({ lot, serial }: ReadLabel): Value => ({ is: 'package', lot, serial })

/** A product as the house says it in a refusal: by name, or by what it could not find. */
function productValue(said: unknown): Value | null {
  const { label, variant, ref, side, gtin, lic, product } = record(said)
  const named = text(label)
  if (named !== null)
    return {
      is: 'product',
      name: nameOf({ label: named, variant: text(variant) }),
      ref: text(ref),
      side: side === 'left' || side === 'right' || side === 'either' ? side : null,
    }
  if (text(gtin) !== null) return { is: 'unknownGtin', gtin: String(gtin) }
  const other = text(ref) ?? ([text(lic), text(product)].filter(Boolean).join(' ') || null)
  return other === null ? null : { is: 'unknownRef', ref: other }
}

function packageValue(said: unknown): Value | null {
  const { lot, serial } = record(said)
  return said === undefined ? null : { is: 'package', lot: text(lot), serial: text(serial) }
}

function dayValue(is: 'useBy', said: unknown): Value | null {
  const day = text(record(said)['useByOn'])
  return day === null ? null : { is, day: dayText(day) }
}
