import { splitCarrier } from './carrier.js'
import { yearOfToday } from './date.js'
import { looksLikeLink, readDigitalLink } from './digital-link.js'
import { GS, labelFromElements, readBracketed, readElementString, type ElementsResult } from './gs1.js'
import type { Element } from './gs1-values.js'
import { GTIN_LENGTHS, toGtin14 } from './gtin.js'
import { joinHibc, labelFromHibc, readHibc, type HibcBarcode } from './hibc.js'
import { refuse, type LabelResult, type Refusal } from './label.js'

/** What one barcode says, before the whole label is judged. */
type Barcode =
  | {
      readonly ok: true
      readonly scheme: 'gs1'
      readonly elements: readonly Element[]
      readonly asText: boolean
    }
  | ({ readonly ok: true; readonly scheme: 'hibc' } & HibcBarcode)

/**
 * How digits of a GTIN's length are read when a GTIN and an element string are both legal. `alone`: there is no
 * other barcode, so that a serial number is out of the question; `ask`: the other barcode has yet to settle it.
 */
type Digits = 'alone' | 'ask' | 'gtin' | 'elements'

/**
 * Reads a package label from whatever a scanner sent, or the text printed under the barcode: GS1 element
 * strings of any carrier, with symbology identifier or without, bracketed text, GS1 Digital Link, HIBC, and a
 * bare EAN or UPC. Two barcodes of one package are given as a pair in any order and judged together.
 *
 * A scanner that works as a keyboard has its habits. Taken as what they stand for: CR, LF or TAB behind the
 * scan; a separator sent as ASCII 29, as its picture `␝`, as `{GS}`, `[GS]` or the letters `\u001d`, `\x1d`,
 * none of which a value could hold; and `<GS>`, which a value could hold but none does (warned of). Other
 * printable stand-ins (`^ | ~ #`) are refused: they are what a misread or a wrong keyboard layout looks like.
 *
 * @param scan one barcode, or the two of one package.
 * @param today the house's day, `YYYY-MM-DD`; settles the century of dates.
 * @returns the label with warnings, or the named reason why it is none. Whether the package may be used is
 *   not judged here.
 * @throws {RangeError} when `today` is not a day.
 */
export function parseScan(scan: string | readonly [string, string], today: string): LabelResult {
  yearOfToday(today)
  if (typeof scan === 'string') {
    const only = readBarcode(scan, today, 'alone')
    return only.ok ? labelOf(only, null, today) : only
  }
  const [first, second] = readPair(scan, today)
  if (!first.ok) return first
  return second.ok ? labelOf(first, second, today) : second
}

/** Digits that could be either are settled by the other barcode: a package has its GTIN once. */
function readPair([a, b]: readonly [string, string], today: string): [Barcode | Refusal, Barcode | Refusal] {
  const first = readBarcode(a, today, 'ask')
  const second = readBarcode(b, today, 'ask')
  if (isUnsettled(first) && second.ok) return [readBarcode(a, today, digitsBeside(second)), second]
  if (isUnsettled(second) && first.ok) return [first, readBarcode(b, today, digitsBeside(first))]
  return [first, second]
}

const isUnsettled = (read: Barcode | Refusal): boolean => !read.ok && read.reason === 'ambiguous'

const digitsBeside = (other: Barcode): Digits =>
  other.scheme === 'gs1' && other.elements.some((element) => element.ai === '01') ? 'elements' : 'gtin'

function labelOf(first: Barcode, second: Barcode | null, today: string): LabelResult {
  if (first.scheme === 'hibc') {
    if (second === null) return labelFromHibc(first.fields)
    if (second.scheme !== 'hibc') return mixed
    const joined = joinHibc(first, second)
    return joined.ok ? labelFromHibc(joined.fields) : joined
  }
  if (second !== null && second.scheme !== 'gs1') return mixed
  const result = labelFromElements([...first.elements, ...(second?.elements ?? [])], today)
  if (!result.ok || !(first.asText || second?.asText)) return result
  return { ok: true, label: { ...result.label, warnings: [...result.label.warnings, 'separator-as-text'] } }
}

const mixed = refuse(
  'mixed-schemes',
  'One barcode is GS1, the other HIBC: scan two of one kind, or one alone.',
)

function readBarcode(scan: string, today: string, digits: Digits): Barcode | Refusal {
  // Never trim spaces at the end here: a space may be the check character of HIBC.
  const text = trimEnd(trimStart(scan, ' \t\r\n\u0002\ufeff'), '\t\r\n\u0003\u0004')
  if (text.trim() === '') return refuse('empty', 'Nothing was scanned.')
  const { kind, id, data } = splitCarrier(text)
  switch (kind) {
    case 'unknown':
      return refuse('unknown-symbology', `A barcode of kind ${id} is not on a package label.`)
    case 'elements':
      return fromScanner(data, today)
    case 'gtin':
      return gtinAlone(data, LENGTHS_BY_CARRIER[id] ?? GTIN_LENGTHS)
    case 'plain':
      return (
        readPlain(data, today) ?? refuse('not-a-label', `What the barcode of kind ${id} holds is no label.`)
      )
    case 'unnamed':
      return readPlain(data, today) ?? readUnnamed(data, today, digits)
  }
}

function trimStart(text: string, signs: string): string {
  let from = 0
  while (from < text.length && signs.includes(text.charAt(from))) from += 1
  return text.slice(from)
}

function trimEnd(text: string, signs: string): string {
  let to = text.length
  while (to > 0 && signs.includes(text.charAt(to - 1))) to -= 1
  return text.slice(0, to)
}

/** What says itself what it is; `null` when the data does not. */
function readPlain(data: string, today: string): Barcode | Refusal | null {
  if (/^\*?\+/.test(data)) {
    const read = readHibc(data, today)
    return read.ok ? { ...read, scheme: 'hibc' } : read
  }
  if (looksLikeLink(data)) return gs1(readDigitalLink(data.trimEnd(), today))
  if (data.startsWith('(')) return gs1(readBracketed(data, today))
  if (/^[=&]/.test(data))
    return refuse('unsupported-scheme', 'Labels of the ICCBBA scheme are not read here.')
  if (data.startsWith('[)>'))
    return refuse('unsupported-scheme', 'Barcodes in an ISO 15434 envelope are not read here.')
  return null
}

function readUnnamed(data: string, today: string, digits: Digits): Barcode | Refusal {
  if (!/^\d+$/.test(data) || !GTIN_LENGTHS.includes(data.length)) return fromScanner(data, today)
  const gtin = gtinAlone(data, GTIN_LENGTHS)
  const elements = fromScanner(data, today)
  if (!elements.ok || !isSecondBarcode(elements)) return gtin
  if (!gtin.ok || digits === 'elements') return elements
  if (digits === 'gtin' || (digits === 'alone' && !labelOf(elements, null, today).ok)) return gtin
  return refuse(
    'ambiguous',
    'These digits may be a GTIN or a lot and date: set the scanner to send what it read.',
  )
}

/** Whether it says what the second barcode of a package does; anything else is more likely a GTIN. */
const isSecondBarcode = (read: Barcode): boolean =>
  read.scheme === 'gs1' && read.elements.every((element) => ['10', '11', '17', '21'].includes(element.ai))

/** How many digits each carrier of a GTIN sends; UPC-A comes with a zero in front or without. */
const LENGTHS_BY_CARRIER: Readonly<Record<string, readonly number[]>> = {
  ']E0': [12, 13],
  ']E4': [8],
  ']I0': [14],
  ']I1': [14],
}

function gtinAlone(digits: string, lengths: readonly number[]): Barcode | Refusal {
  const longest = Math.max(...lengths)
  if (digits.length < longest && !lengths.includes(digits.length)) {
    return refuse('truncated', `The barcode has ${longest} digits, only ${digits.length} were sent.`)
  }
  if (digits.length > longest) {
    return refuse('data-too-long', `The barcode has ${longest} digits, ${digits.length} were sent.`)
  }
  const read = toGtin14(digits)
  return read.ok ? gs1({ ok: true, elements: [{ ai: '01', value: read.gtin }] }) : read
}

/** Ways to write the separator that no value could hold. */
const PICTURED_GS = /\u241d|\{GS\}|\[GS\]|\\u001[dD]|\\x1[dD]/g

function fromScanner(data: string, today: string): Barcode | Refusal {
  const plain = data.replace(PICTURED_GS, GS)
  const asText = plain.includes('<GS>')
  const read = gs1(readElementString(plain.replaceAll('<GS>', GS), today))
  return read.ok && read.scheme === 'gs1' ? { ...read, asText } : read
}

function gs1(read: ElementsResult): Barcode | Refusal {
  return read.ok ? { ok: true, scheme: 'gs1', elements: read.elements, asText: false } : read
}
