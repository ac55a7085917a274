import { dayOf, dayOfYear, fullYear, monthEnd, yearOfToday, type LabelDay } from './date.js'
import { refuse, type Label, type LabelResult, type LabelWarning, type Refusal } from './label.js'

/** The characters of HIBC in the order of their values, 0 to 42: those of Code 39. */
const CHARACTERS = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ-. $/+%'

/** Longest lot or serial number (IMDRF/UDI WG/N48, HIBCC table). */
const LONGEST = 18

/**
 * The check character of an HIBC string: sum of the values of all its characters, the leading `+` included
 * and asterisks not, modulo 43.
 *
 * @throws {RangeError} when a character is not one of the 43.
 * @see ANSI/HIBC 2.6, section 4.3.1: `+A123BJC5D6E71` sums to 145 and gives G.
 */
export function hibcCheckCharacter(data: string): string {
  let sum = 0
  for (const character of data) {
    const value = CHARACTERS.indexOf(character)
    if (value < 0) throw new RangeError(`not an HIBC character: ${JSON.stringify(character)}`)
    sum += value
  }
  return CHARACTERS.charAt(sum % 43)
}

/** What one HIBC barcode says. */
export interface HibcFields {
  readonly lic?: string
  readonly product?: string
  readonly unitOfMeasure?: string
  readonly quantity?: number
  readonly lot?: string
  readonly serial?: string
  readonly useByOn?: string
  /** Hour of the day of use-by, 0 to 23, where the label gives one. */
  readonly useByHour?: number
  readonly madeOn?: string
}

export interface HibcBarcode {
  readonly fields: HibcFields
  /** Check character of the primary data: what a second barcode of the same package repeats as its link. */
  readonly link: string
}

export type HibcResult = ({ readonly ok: true } & HibcBarcode) | Refusal
export type HibcFieldsResult = { readonly ok: true; readonly fields: HibcFields } | Refusal

/**
 * Reads one HIBC barcode of the supplier standard: primary, secondary, or both in one.
 * A wrong check character is always refused.
 *
 * @param text from `+` to the check character; asterisks around it and a `_` printed for a final space are
 *   taken as what they stand for. A final space may be the check character: do not trim.
 * @param today the house's day, `YYYY-MM-DD`; settles the century of years with two digits.
 */
export function readHibc(text: string, today: string): HibcResult {
  const bare = /^\*.*\*$/.test(text) ? text.slice(1, -1) : text
  const scan = bare.endsWith('_') ? `${bare.slice(0, -1)} ` : bare
  const bad = [...scan].find((character) => !CHARACTERS.includes(character))
  if (bad !== undefined) return refuse('bad-character', `HIBC has no character ${JSON.stringify(bad)}.`)
  if (scan.length < 4) return refuse('truncated', 'The HIBC barcode is cut short.')

  const data = scan.slice(0, -1)
  if (hibcCheckCharacter(data) !== scan.slice(-1)) {
    return refuse('check-digit', 'The check character of the HIBC barcode is wrong.')
  }
  if (data.startsWith('+/'))
    return refuse('not-a-label', 'This HIBC barcode is for people and places, not a package.')
  if (/^\+[A-Z]/.test(data)) return readPrimary(data, today)

  // A second barcode: between data and check character it repeats the check character of the first.
  const read = readSecondary(data.slice(1, -1), today)
  return read.ok ? { ok: true, fields: read.fields, link: data.slice(-1) } : read
}

function readPrimary(data: string, today: string): HibcResult {
  const end = data.indexOf('/')
  const primary = end < 0 ? data : data.slice(0, end)
  const found = /^\+([A-Z][0-9A-Z]{3})([0-9A-Z]+)([0-9])$/.exec(primary)
  if (!found) {
    return primary.length < 7
      ? refuse('truncated', 'The product in the HIBC barcode is cut short.')
      : refuse(
          'bad-character',
          'The product in the HIBC barcode is not letters and digits ending in a digit.',
        )
  }
  const [, lic = '', product = '', unitOfMeasure = ''] = found
  if (product.length > LONGEST)
    return refuse('data-too-long', `The product number has ${product.length} characters.`)
  const own: HibcFields = { lic, product, unitOfMeasure }
  const link = hibcCheckCharacter(primary)
  if (end < 0) return { ok: true, fields: own, link }
  const more = readSecondary(data.slice(end + 1), today)
  return more.ok ? { ok: true, fields: { ...own, ...more.fields }, link } : more
}

/**
 * Reads secondary data: quantity, use-by, lot or serial number, then supplements behind `/`.
 *
 * @param data without the leading `+`, link and check character.
 * @see IMDRF/UDI WG/N48 FINAL:2019, HIBCC table of flags.
 */
export function readSecondary(data: string, today: string): HibcFieldsResult {
  let fields: HibcFields = {}
  for (const segment of data.split('/')) {
    const read = SUPPLEMENT.test(segment) ? readSupplement(segment, today) : readReference(segment, today)
    if (!read.ok) return read
    const merged = mergeFields(fields, read.fields)
    if (!merged.ok) return merged
    fields = merged.fields
  }
  return { ok: true, fields }
}

const SUPPLEMENT = /^(S|Q|14D|16D)(.*)$/

function readSupplement(segment: string, today: string): HibcFieldsResult {
  const [, flag = '', value = ''] = SUPPLEMENT.exec(segment) ?? []
  if (flag === 'S') return numbered('serial', value, {})
  if (flag === 'Q') {
    if (!/^\d+$/.test(value)) return refuse('bad-character', `The quantity ${value} is not a number.`)
    return { ok: true, fields: { quantity: Number(value) } }
  }
  const date = readDate('YYYYMMDD', value, today)
  if (!date.ok) return date
  if (date.rest !== '') return refuse('data-too-long', `Behind the date in /${segment} there is more.`)
  return { ok: true, fields: flag === '14D' ? { useByOn: date.day } : { madeOn: date.day } }
}

/** Form of the date behind `$$` by the digit that follows; 0 and 1 begin the month of MMYY itself. */
const DATE_FORMS: Readonly<Record<string, string>> = {
  '2': 'MMDDYY',
  '3': 'YYMMDD',
  '4': 'YYMMDDHH',
  '5': 'YYJJJ',
  '6': 'YYJJJHH',
}

function readReference(segment: string, today: string): HibcFieldsResult {
  if (/^\d/.test(segment)) return dated('YYJJJ', segment, 'lot', {}, today)
  const [, flag = '', more = ''] = /^(\$\$\+|\$\$|\$\+|\$)(.*)$/.exec(segment) ?? []
  const kind = flag.endsWith('+') ? 'serial' : 'lot'
  if (flag === '')
    return refuse('unknown-flag', `HIBC data does not begin with ${segment.slice(0, 3) || 'nothing'}.`)
  if (!flag.startsWith('$$')) {
    return more === ''
      ? refuse('empty-value', `There is no ${kind} behind its flag.`)
      : numbered(kind, more, {})
  }

  const width = kind === 'serial' ? 0 : more.startsWith('8') ? 2 : more.startsWith('9') ? 5 : 0
  const digits = more.slice(1, 1 + width)
  if (digits.length < width) return refuse('truncated', 'The quantity in the HIBC barcode is cut short.')
  if (/\D/.test(digits)) return refuse('bad-character', `The quantity ${digits} is not a number.`)
  const counted: HibcFields = width === 0 ? {} : { quantity: Number(digits) }
  const rest = width === 0 ? more : more.slice(1 + width)

  if (rest === '' && width > 0) return { ok: true, fields: counted }
  if (/^[01]/.test(rest)) return dated('MMYY', rest, kind, counted, today)
  if (rest.startsWith('7')) return numbered(kind, rest.slice(1), counted)
  const form = DATE_FORMS[rest.slice(0, 1)]
  if (form === undefined)
    return refuse('unknown-flag', `HIBC has no date that begins with ${rest.slice(0, 1)}.`)
  return dated(form, rest.slice(1), kind, counted, today)
}

function dated(
  form: string,
  text: string,
  kind: 'lot' | 'serial',
  before: HibcFields,
  today: string,
): HibcFieldsResult {
  const date = readDate(form, text, today)
  if (!date.ok) return date
  const useBy: HibcFields = {
    ...before,
    useByOn: date.day,
    ...(date.hour === undefined ? {} : { useByHour: date.hour }),
  }
  return date.rest === '' ? { ok: true, fields: useBy } : numbered(kind, date.rest, useBy)
}

function numbered(kind: 'lot' | 'serial', value: string, before: HibcFields): HibcFieldsResult {
  if (value === '') return refuse('empty-value', `There is no ${kind} behind its flag.`)
  if (value.length > LONGEST) {
    const detail = `The ${kind} has ${value.length} characters, at most ${LONGEST} are allowed.`
    return refuse(kind === 'lot' ? 'lot-too-long' : 'serial-too-long', detail)
  }
  return { ok: true, fields: { ...before, [kind]: value } }
}

/**
 * A date at the beginning of `text`. MMYY is the last day of its month, and two-digit years fall into the
 * same window as with GS1 (common practice, no source).
 */
function readDate(
  form: string,
  text: string,
  today: string,
):
  | { readonly ok: true; readonly day: string; readonly hour: number | undefined; readonly rest: string }
  | Refusal {
  const digits = text.slice(0, form.length)
  if (/\D/.test(digits)) return refuse('bad-character', `The date ${digits} has more than digits in it.`)
  if (digits.length < form.length) return refuse('truncated', `The date ${digits} is cut short.`)
  const part = (letter: string): number =>
    Number([...digits].filter((_, index) => form.charAt(index) === letter).join(''))
  const year = form.startsWith('YYYY') ? part('Y') : fullYear(part('Y'), yearOfToday(today))
  const hour = form.endsWith('HH') ? part('H') : undefined
  const found: LabelDay = form.includes('J')
    ? dayOfYear(year, part('J'))
    : form.includes('D')
      ? dayOf(year, part('M'), part('D'))
      : monthEnd(year, part('M'))
  if (!found.ok) return refuse('no-such-date', `There is no date ${digits} (${form}): its ${found.why}.`)
  if (hour !== undefined && hour > 23) return refuse('no-such-date', `There is no hour ${hour}.`)
  return { ok: true, day: found.day, hour, rest: text.slice(form.length) }
}

const FIELD_NAMES: Readonly<Record<keyof HibcFields, string>> = {
  lic: 'labeler',
  product: 'product',
  unitOfMeasure: 'unit of measure',
  quantity: 'quantity',
  lot: 'lot',
  serial: 'serial number',
  useByOn: 'use-by date',
  useByHour: 'use-by hour',
  madeOn: 'date of manufacture',
}

/** Puts the fields of two pieces together, and refuses where they contradict each other. */
function mergeFields(a: HibcFields, b: HibcFields): HibcFieldsResult {
  for (const key of Object.keys(FIELD_NAMES) as (keyof HibcFields)[]) {
    if (a[key] !== undefined && b[key] !== undefined && a[key] !== b[key]) {
      return refuse('conflicting-values', `The ${FIELD_NAMES[key]} is given twice: ${a[key]} and ${b[key]}.`)
    }
  }
  return { ok: true, fields: { ...a, ...b } }
}

/**
 * Two barcodes of one package. The second repeats the check character of the first: where it does not, the
 * two come from different packages.
 */
export function joinHibc(a: HibcBarcode, b: HibcBarcode): HibcFieldsResult {
  const merged = mergeFields(a.fields, b.fields)
  if (!merged.ok) return merged
  return a.link === b.link
    ? merged
    : refuse('link-mismatch', 'The two HIBC barcodes do not belong together: were two packages scanned?')
}

/** What a whole HIBC label says; without a first barcode it names no product, which is warned of. */
export function labelFromHibc(fields: HibcFields): LabelResult {
  const { lic, product, lot, serial, useByOn, useByHour, madeOn } = fields
  const warnings: LabelWarning[] = []
  if (product === undefined) warnings.push('no-product')
  if (lot === undefined) warnings.push('no-lot')
  if (useByOn === undefined) warnings.push('no-use-by')
  if (useByHour !== undefined) warnings.push('use-by-has-hour')
  if (useByOn !== undefined && madeOn !== undefined && useByOn < madeOn) warnings.push('use-by-before-made')
  const label: Label = {
    scheme: 'hibc',
    ...(lic === undefined ? {} : { lic }),
    ...(product === undefined ? {} : { product }),
    ...(lot === undefined ? {} : { lot }),
    ...(serial === undefined ? {} : { serial }),
    ...(useByOn === undefined ? {} : { useByOn }),
    ...(madeOn === undefined ? {} : { madeOn }),
    warnings,
  }
  return { ok: true, label }
}
