import { dayOf, monthEnd, yearOfToday, type LabelDay } from './date.js'
import { refuse, type Refusal } from './label.js'

/** What somebody keyed from a label that would not scan. */
export interface TypedEntry {
  readonly ref: string
  readonly lot: string
  readonly serial?: string | undefined
  readonly useByOn: string
}

/** A typed entry in the form in which it is compared and kept. */
export interface TypedLabel {
  readonly ref: string
  readonly lot: string
  readonly serial?: string
  /** `YYYY-MM-DD`; a month without a day has become its last day. */
  readonly useByOn: string
}

export type TypedResult = { readonly ok: true; readonly label: TypedLabel } | Refusal

const LONGEST_LOT = 20
const LONGEST_REF = 40

/** Full-width letters and printed dashes as a keyboard has them, spaces gone at both ends and single within. */
const tidy = (text: string): string =>
  text
    .normalize('NFKC')
    .replace(/[\u2010-\u2015\u2212]/g, '-')
    .replace(/\s+/g, ' ')
    .trim()

/**
 * Puts a typed label in order, or says what is wrong with it. Capitals stay as typed: compare with
 * {@link sameAsTyped}.
 *
 * @param entry `useByOn` as `YYYY-MM-DD`, or `YYYY-MM` or `YYYY-MM-00` for the month's last day.
 * @param today the house's day, `YYYY-MM-DD`; a use-by year more than 50 from it is taken for a slip.
 */
export function normaliseTyped(entry: TypedEntry, today: string): TypedResult {
  const ref = tidy(entry.ref).toUpperCase()
  const lot = tidy(entry.lot)
  const serial = tidy(entry.serial ?? '')
  if (ref === '') return refuse('empty-value', 'The REF is missing.')
  if (lot === '') return refuse('empty-value', 'The lot is missing.')
  if (ref.length > LONGEST_REF)
    return refuse('data-too-long', `The REF has more than ${LONGEST_REF} characters.`)
  if (lot.length > LONGEST_LOT)
    return refuse('lot-too-long', `The lot has more than ${LONGEST_LOT} characters.`)
  if (serial.length > LONGEST_LOT) {
    return refuse('serial-too-long', `The serial number has more than ${LONGEST_LOT} characters.`)
  }
  for (const [name, text] of [
    ['REF', ref],
    ['lot', lot],
    ['serial number', serial],
  ] as const) {
    if (/[^ -~]/.test(text))
      return refuse('bad-character', `The ${name} holds a character that no label prints.`)
  }

  const day = readDay(tidy(entry.useByOn))
  if (!day?.ok) return refuse('no-such-date', `There is no day ${entry.useByOn.trim() || '(nothing typed)'}.`)
  if (Math.abs(Number(day.day.slice(0, 4)) - yearOfToday(today)) > 50) {
    return refuse('no-such-date', `The year of ${day.day} is more than 50 years away.`)
  }
  return { ok: true, label: { ref, lot, ...(serial === '' ? {} : { serial }), useByOn: day.day } }
}

function readDay(text: string): LabelDay | null {
  const found = /^(\d{4})-(\d{2})(?:-(\d{2}))?$/.exec(text)
  if (!found) return null
  const [, year, month, day] = found
  return day === undefined || day === '00'
    ? monthEnd(Number(year), Number(month))
    : dayOf(Number(year), Number(month), Number(day))
}

/**
 * Whether a typed REF, lot or serial number means the recorded one: case and spaces are no difference, as
 * nobody can be sure of them from a printed label.
 */
export function sameAsTyped(typed: string, recorded: string): boolean {
  const bare = (text: string) => tidy(text).replaceAll(' ', '').toUpperCase()
  return bare(typed) === bare(recorded)
}
