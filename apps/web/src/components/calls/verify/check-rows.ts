import type { CallView, ItemView } from '@bellpull/contracts'
import type { Side } from '@bellpull/domain'
import { inSentence, nameOf } from '@/composables/item'
import { dayText } from '@/composables/times'
import type { TextKey } from '@/composables/useText'
import { packageOn, productOn, type ReadLabel } from './label'

/** `agrees` only for a check that ran; what has not run is `notRun`, whatever the reason. */
export type Mark = 'agrees' | 'differs' | 'notRun'

export type Says =
  | 'same'
  | 'fits'
  | 'inDate'
  | 'looked'
  | 'differs'
  | 'otherSide'
  | 'expired'
  | 'recordDiffers'
  | 'notYet'
  | 'covered'
  | 'houseCompares'
  | 'notOnLabel'
  | 'notChecked'
  | 'open'
  | 'pairFits'
  | 'pairMismatch'

export type Cell =
  | { readonly as: 'size'; readonly size: string; readonly variant: string | null }
  | { readonly as: 'side'; readonly side: Side }
  | { readonly as: 'fits'; readonly side: Side }
  | { readonly as: 'plain'; readonly text: string }
  | { readonly as: 'day'; readonly text: string }
  | { readonly as: 'words'; readonly key: TextKey; readonly named: Record<string, string> }
  | { readonly as: 'covered' }
  | { readonly as: 'nothing' }

export const ROW_KEYS = ['part', 'side', 'ref', 'useBy', 'lot', 'package', 'pair'] as const
export type RowKey = (typeof ROW_KEYS)[number]
/** Rows that the label answers. */
export const LABEL_ROWS: readonly RowKey[] = ['part', 'side', 'ref', 'useBy', 'lot']

export interface CheckRow {
  readonly key: RowKey
  /** Unique among the rows; there is one row for each pair. */
  readonly id: string
  readonly called: Cell
  readonly label: Cell
  readonly mark: Mark
  readonly says: Says
  /** Of a pair: what the other part is called. */
  readonly partner: string | null
}

/** Another part of the case that this one has to fit. */
export interface Partner {
  readonly item: ItemView
  readonly result: ItemView['pairs'][number]['result']
}

export interface CheckState {
  readonly call: CallView
  readonly item: ItemView
  readonly label: ReadLabel | null
  /** The label stays covered: what was heard has not been keyed yet. */
  readonly covered: boolean
  /** Somebody looked: dry, whole, sealed. */
  readonly looked: boolean
  /** The house's day, `YYYY-MM-DD`. */
  readonly today: string
  readonly partners: readonly Partner[]
  /** What the house calls a GTIN, where this screen happens to know it. */
  readonly nameOfGtin: (gtin: string) => string | null
  readonly timeOf: (instant: string) => string
}

const words = (key: TextKey, named: Record<string, string> = {}): Cell => ({ as: 'words', key, named })
const plain = (text: string): Cell => ({ as: 'plain', text })

/** Everything that is compared, row by row: what was called, what the label says, and whether that agrees. */
export function checkRows(state: CheckState): CheckRow[] {
  return [
    ...[partRow, sideRow, refRow, useByRow, lotRow].map((row) => coverable(row(state), state)),
    packageRow(state),
    ...state.partners.map((partner) => pairRow(partner, state)),
  ]
}

type Row = Omit<CheckRow, 'id' | 'partner'>

function coverable(row: Row, { label, covered }: CheckState): CheckRow {
  const whole = { ...row, id: row.key, partner: null }
  if (label === null) return { ...whole, label: { as: 'nothing' }, mark: 'notRun', says: 'notYet' }
  return covered ? { ...whole, label: { as: 'covered' }, mark: 'notRun', says: 'covered' } : whole
}

/** What comes of comparing the product, which size, side and REF all hang on. */
function product(state: CheckState): { same: boolean; mark: Mark; says: Says } {
  const found = state.label === null ? 'unknown' : productOn(state.label, state.item)
  if (found === 'same') return { same: true, mark: 'agrees', says: 'same' }
  return found === 'other'
    ? { same: false, mark: 'differs', says: 'differs' }
    : { same: false, mark: 'notRun', says: 'houseCompares' }
}

const sizeCell = ({ size, label, variant }: ItemView): Cell => ({ as: 'size', size: size ?? label, variant })

function partRow(state: CheckState): Row {
  const { item, label, nameOfGtin } = state
  const { same, mark, says } = product(state)
  const name = label?.gtin ? nameOfGtin(label.gtin) : null
  const other = name === null ? words('verify.label.other') : words('verify.label.otherNamed', { name })
  return {
    key: 'part',
    called: sizeCell(item),
    label: same ? sizeCell(item) : mark === 'differs' ? other : words('verify.label.unknown'),
    mark,
    says,
  }
}

function sideRow(state: CheckState): Row {
  const { call, item } = state
  const base = { key: 'side', called: { as: 'side', side: call.side } } as const
  if (!product(state).same)
    return { ...base, label: words('verify.label.unknown'), mark: 'notRun', says: 'houseCompares' }
  if (item.side === 'either')
    return { ...base, label: { as: 'fits', side: 'either' }, mark: 'agrees', says: 'fits' }
  const right = item.side === call.side
  return {
    ...base,
    label: { as: 'side', side: item.side },
    mark: right ? 'agrees' : 'differs',
    says: right ? 'same' : 'otherSide',
  }
}

const refOf = ({ system, ref }: ItemView): string => (system ? `${system}, ${ref}` : ref)

function refRow(state: CheckState): Row {
  const { item, label } = state
  const { same, mark, says } = product(state)
  const said = label?.ref ?? label?.hibc ?? null
  const found = said !== null ? plain(said) : words('verify.label.gtin', { gtin: label?.gtin ?? '' })
  return { key: 'ref', called: plain(refOf(item)), label: same ? plain(refOf(item)) : found, mark, says }
}

function useByRow({ item, label, today }: CheckState): Row {
  const base = { key: 'useBy', called: words('verify.called.caseOn', { day: dayText(today) }) } as const
  const day = label?.useByOn ?? null
  if (label === null || day === null)
    return { ...base, label: words('verify.label.noDate'), mark: 'notRun', says: 'notOnLabel' }
  const shown = { ...base, label: { as: 'day', text: dayText(day) } } as const
  if (day < today) return { ...shown, mark: 'differs', says: 'expired' }
  // The record of another package says nothing about this one.
  const isOwn = productOn(label, item) !== 'other' && packageOn(label, item) !== 'other'
  if (isOwn && item.unit !== null && item.unit.useByOn !== day)
    return {
      ...shown,
      called: words('common.useBy', { day: dayText(item.unit.useByOn) }),
      mark: 'differs',
      says: 'recordDiffers',
    }
  return { ...shown, mark: 'agrees', says: 'inDate' }
}

function lotRow({ item, label }: CheckState): Row {
  const { unit } = item
  const called =
    unit === null
      ? words('verify.called.noPackage')
      : unit.serial === null
        ? words('verify.called.lot', { lot: unit.lot })
        : words('verify.called.lotSerial', { lot: unit.lot, serial: unit.serial })
  const found = label === null ? 'unknown' : packageOn(label, item)
  const says =
    found === 'same' ? 'same' : found === 'other' ? 'differs' : unit === null ? 'houseCompares' : 'notOnLabel'
  return {
    key: 'lot',
    called,
    label: label === null ? { as: 'nothing' } : lotCell(label),
    mark: found === 'same' ? 'agrees' : found === 'other' ? 'differs' : 'notRun',
    says,
  }
}

function lotCell({ lot, serial }: ReadLabel): Cell {
  if (lot === null)
    return serial === null ? words('verify.label.noLot') : words('verify.label.serialOnly', { serial })
  return serial === null ? plain(lot) : words('verify.label.lotSerial', { lot, serial })
}

const packageRow = ({ looked }: CheckState): CheckRow => ({
  key: 'package',
  id: 'package',
  called: words('verify.called.whole'),
  label: { as: 'nothing' },
  mark: looked ? 'agrees' : 'notRun',
  says: looked ? 'looked' : 'notYet',
  partner: null,
})

const PAIR: Record<Partner['result'], { mark: Mark; says: Says }> = {
  fits: { mark: 'agrees', says: 'pairFits' },
  mismatch: { mark: 'differs', says: 'pairMismatch' },
  notChecked: { mark: 'notRun', says: 'notChecked' },
  open: { mark: 'notRun', says: 'open' },
}

function pairRow({ item, result }: Partner, { timeOf }: CheckState): CheckRow {
  return {
    key: 'pair',
    id: `pair:${item.id}`,
    called: partnerCell(item, timeOf),
    label: result === 'notChecked' ? words('verify.partner.noRule') : { as: 'nothing' },
    ...PAIR[result],
    partner: inSentence(nameOf(item)),
  }
}

function partnerCell(item: ItemView, timeOf: CheckState['timeOf']): Cell {
  if (item.outcome === 'implanted') return words('verify.partner.implanted')
  if (item.openedAt !== null) return words('verify.partner.opened', { time: timeOf(item.openedAt) })
  if (item.verifiedAt !== null) return words('verify.partner.verified', { time: timeOf(item.verifiedAt) })
  return words('verify.partner.called')
}

/** Something on the label is not what was called: nothing can be verified with it. */
export const hasDifference = (rows: readonly CheckRow[]): boolean =>
  rows.some(({ mark, key }) => mark === 'differs' && key !== 'pair')
