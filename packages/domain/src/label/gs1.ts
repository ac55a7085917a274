import { gs1Day } from './date.js'
import { beginsIdentifier, identifierAt, identifierOf } from './gs1-identifiers.js'
import { checkValue, nameOf, type Element } from './gs1-values.js'
import { refuse, type Label, type LabelResult, type LabelWarning, type Refusal } from './label.js'

export type ElementsResult = { readonly ok: true; readonly elements: readonly Element[] } | Refusal

/** Group separator, ASCII 29: how a scanner sends the FNC1 that ends an element without a fixed length. */
export const GS = '\u001d'

const nothing = refuse('empty', 'There is no data in the scan.')

/**
 * Takes an element string apart, as it comes from a scanner without its symbology identifier.
 *
 * A separator is needed after every element but the last, save those of a predefined length, after which it
 * is tolerated; so is one in front (some decoders send the first FNC1) and one at the end.
 *
 * @param data element string with GS, ASCII 29, as separator.
 * @param today the house's day, `YYYY-MM-DD`; settles the century of dates.
 */
export function readElementString(data: string, today: string): ElementsResult {
  let rest = data.startsWith(GS) ? data.slice(1) : data
  if (rest === '') return nothing
  const elements: Element[] = []
  while (rest !== '') {
    if (rest.startsWith(GS))
      return refuse('empty-value', 'Two separators follow each other with nothing between.')
    const identifier = identifierAt(rest)
    if (!identifier) {
      return beginsIdentifier(rest)
        ? refuse('truncated', `The label ends in the middle of an element: ${rest}.`)
        : refuse('unknown-ai', `No GS1 element begins with ${rest.slice(0, 4)}.`)
    }
    const after = rest.slice(identifier.ai.length)
    const separator = after.indexOf(GS)
    const upTo = separator < 0 ? after.length : separator
    const value = after.slice(0, identifier.predefined ? Math.min(upTo, identifier.maxLength) : upTo)
    const broken = checkValue(identifier, value, today)
    if (broken) return broken
    elements.push({ ai: identifier.ai, value })
    rest = after.slice(value.length)
    if (rest.startsWith(GS)) rest = rest.slice(1)
  }
  return { ok: true, elements }
}

/**
 * Takes the printed form apart, as in `(01)09506000134352(10)ABC123`. A `(` inside a value is written `\(`.
 * Spaces around the elements are left out, as no value may hold any.
 *
 * @param today the house's day, `YYYY-MM-DD`.
 */
export function readBracketed(text: string, today: string): ElementsResult {
  const elements: Element[] = []
  // Split at every "(" that has no backslash before it; the first piece is what stands before the first.
  const [before, ...pieces] = text.split(/(?<!\\)\(/)
  if (before?.trim() !== '')
    return refuse('not-a-label', 'The text does not begin with an element in brackets.')
  for (const piece of pieces) {
    const close = piece.indexOf(')')
    const ai = close < 0 ? piece : piece.slice(0, close)
    const identifier = close < 0 ? undefined : identifierOf(ai)
    if (!identifier) return refuse('unknown-ai', `No GS1 element is called (${ai.slice(0, 8)}).`)
    const value = piece
      .slice(close + 1)
      .trim()
      .replaceAll('\\(', '(')
    const broken = checkValue(identifier, value, today)
    if (broken) return broken
    elements.push({ ai, value })
  }
  return { ok: true, elements }
}

/** The serial number only means something together with the product it counts. */
const SERIAL_NEEDS =
  'A serial number is on the label without a GTIN: scan the other barcode of the package too.'

/**
 * What a whole label says: all elements of one barcode, or of both where a package has two.
 * Rules about what goes together are judged here, over all of them, and not barcode by barcode.
 *
 * A label without GTIN that is otherwise legal is accepted with a warning, although GS1 wants one on the same
 * package: it may be on the other barcode. The exception is a serial number, which names nothing by itself.
 *
 * @param elements with values already checked.
 * @param today the house's day, `YYYY-MM-DD`.
 */
export function labelFromElements(elements: readonly Element[], today: string): LabelResult {
  const values = new Map<string, string>()
  for (const { ai, value } of elements) {
    const before = values.get(ai)
    if (before !== undefined && before !== value) {
      return refuse('conflicting-values', `The ${nameOf(ai)} is given twice: ${before} and ${value}.`)
    }
    values.set(ai, value)
  }
  const broken = checkCompany(values)
  if (broken) return broken

  const expiry = useBy(values, today)
  if (!expiry.ok) return expiry
  const { useByOn, hasHour } = expiry
  const made = values.get('11')
  const madeOn = made === undefined ? undefined : resolved(made, true, today)
  const gtin = values.get('01') ?? values.get('03')
  const lot = values.get('10')
  const serial = values.get('21')

  const warnings: LabelWarning[] = []
  if (gtin === undefined) warnings.push('no-gtin')
  if (lot === undefined) warnings.push('no-lot')
  if (useByOn === undefined) {
    warnings.push('no-use-by')
    if (lot !== undefined && mayHoldDate(lot, today)) warnings.push('lot-may-hold-date')
    if (serial !== undefined && mayHoldDate(serial, today)) warnings.push('serial-may-hold-date')
  }
  if (hasHour) warnings.push('use-by-has-hour')
  if (useByOn !== undefined && madeOn !== undefined && useByOn < madeOn) warnings.push('use-by-before-made')

  const label: Label = {
    scheme: 'gs1',
    ...(gtin === undefined ? {} : { gtin }),
    ...(lot === undefined ? {} : { lot }),
    ...(serial === undefined ? {} : { serial }),
    ...(useByOn === undefined ? {} : { useByOn }),
    ...(madeOn === undefined ? {} : { madeOn }),
    warnings,
  }
  return { ok: true, label }
}

/** What must, and what must not, stand on one package together. */
function checkCompany(values: ReadonlyMap<string, string>): Refusal | null {
  const hasAll = (combination: string, present: (ai: string) => boolean) =>
    combination.split('+').every(present)
  for (const ai of values.keys()) {
    const identifier = identifierOf(ai)
    if (!identifier) continue
    const foe = identifier.excludes.find((other) => values.has(other))
    if (foe) return refuse('forbidden-pair', `${nameOf(ai)} and ${nameOf(foe)} may not be on one package.`)
    const { requires } = identifier
    if (requires.length === 0 || requires.some((one) => hasAll(one, (need) => values.has(need)))) continue
    if (ai === '21') return refuse('serial-without-gtin', SERIAL_NEEDS)
    // Lacking the GTIN alone is no refusal: see above.
    if (requires.some((one) => hasAll(one, (need) => need === '01' || values.has(need)))) continue
    return refuse('missing-companion', `${nameOf(ai)} needs ${requires.join(' or ')} on the same package.`)
  }
  return null
}

/** A date whose value has been checked before. */
function resolved(yymmdd: string, dayZero: boolean, today: string): string | undefined {
  const found = gs1Day(yymmdd, today, dayZero)
  return found.ok ? found.day : undefined
}

/** Use-by from AI 17, or from 7003, which adds an hour of that day. */
function useBy(
  values: ReadonlyMap<string, string>,
  today: string,
): { readonly ok: true; readonly useByOn: string | undefined; readonly hasHour: boolean } | Refusal {
  const day = values.get('17')
  const hour = values.get('7003')
  const fromDay = day === undefined ? undefined : resolved(day, true, today)
  const fromHour = hour === undefined ? undefined : resolved(hour.slice(0, 6), false, today)
  if (fromDay !== undefined && fromHour !== undefined && fromDay !== fromHour) {
    return refuse(
      'conflicting-values',
      `The use-by date is given twice: ${fromDay} (17) and ${fromHour} (7003).`,
    )
  }
  return { ok: true, useByOn: fromDay ?? fromHour, hasHour: fromHour !== undefined }
}

/**
 * Whether a value looks as if it had swallowed the use-by date that followed it: `17` and a date that exists,
 * at the end or before what reads like lot or serial number. Where a separator was lost the label is still
 * legal, and no parser can tell (common practice, no source).
 */
function mayHoldDate(value: string, today: string): boolean {
  return [...value.matchAll(/17(?=(\d{6})($|10|21|240))/g)].some(
    (found) => gs1Day(found[1] ?? '', today, true).ok,
  )
}
