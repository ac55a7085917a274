import { identifierOf } from './gs1-identifiers.js'
import { checkValue, nameOf, type Element } from './gs1-values.js'
import type { ElementsResult } from './gs1.js'
import { refuse, type Refusal } from './label.js'

/**
 * Primary keys, and the qualifiers that may follow each in the path: one of the sequences, in its order,
 * with gaps. As in the GS1 Barcode Syntax Dictionary (`dlpkey`).
 */
const KEYS: ReadonlyMap<string, readonly (readonly string[])[]> = new Map([
  ['00', []],
  ['01', [['22', '10', '21'], ['235']]],
  ['253', []],
  ['255', []],
  ['401', []],
  ['402', []],
  ['414', [['254'], ['7040']]],
  ['415', [['8020']]],
  ['417', [['7040']]],
  ['8003', []],
  ['8004', [['7040']]],
  ['8006', [['22', '10', '21']]],
  ['8010', [['8011']]],
  ['8013', []],
  ['8017', [['8019']]],
  ['8018', [['8019']]],
])

const LINK = /^(?:https?|HTTPS?):\/\/[A-Za-z0-9.:[\]-]+(\/[^?#]*)(?:\?([^#]*))?(?:#.*)?$/

/** Whether the text is meant as a web address, in whichever case. */
export const looksLikeLink = (text: string): boolean => /^https?:\/\//i.test(text)

/**
 * Takes a GS1 Digital Link URI apart: `https://host/.../01/{GTIN}/10/{lot}/21/{serial}?17={use-by}`.
 *
 * The scheme is all small or all capital letters, keys are numbers (no `/gtin/`), a GTIN has its fourteen
 * digits, qualifiers stand in their order and everything else in the query. A `+` is itself in the path and
 * a space in the query; the fragment says nothing.
 *
 * @param today the house's day, `YYYY-MM-DD`.
 * @see GS1 Digital Link standard: URI syntax.
 */
export function readDigitalLink(uri: string, today: string): ElementsResult {
  if (!/^[!-~]+$/.test(uri))
    return refuse('bad-character', 'The link holds a character that no web address may hold.')
  const found = LINK.exec(uri)
  if (!found) return refuse('not-a-label', 'The link is not written as a GS1 Digital Link.')
  const [, path = '', query = ''] = found

  const fromPath = readPath(path.split('/').slice(1), today)
  if (!fromPath.ok) return fromPath
  const fromQuery = readQuery(query, today)
  if (!fromQuery.ok) return fromQuery
  return { ok: true, elements: [...fromPath.elements, ...fromQuery.elements] }
}

function readPath(segments: readonly string[], today: string): ElementsResult {
  // From the right, so that whatever stands before the key may look as it likes.
  let start = segments.length - 2
  while (!KEYS.has(segments[start] ?? '') && identifierOf(segments[start] ?? '')) start -= 2
  const sequences = KEYS.get(segments[start] ?? '')
  if (!sequences) return refuse('not-a-label', 'The link names no product: there is no GS1 key in its path.')

  const elements: Element[] = []
  for (let at = start; at < segments.length; at += 2) {
    const element = readElement(segments[at] ?? '', decode(segments[at + 1] ?? ''), today)
    if (!element.ok) return element
    elements.push(element.element)
  }
  const qualifiers = elements.slice(1).map((element) => element.ai)
  if (qualifiers.length > 0 && !sequences.some((sequence) => inOrder(qualifiers, sequence))) {
    return refuse(
      'link-structure',
      `In the link ${qualifiers.join(', ')} may not follow the key in this order.`,
    )
  }
  return { ok: true, elements }
}

function readQuery(query: string, today: string): ElementsResult {
  const elements: Element[] = []
  for (const pair of query.split(/[&;]/)) {
    const [key = '', ...rest] = pair.split('=')
    // Other words in the query belong to whoever serves the link.
    if (!/^\d+$/.test(key)) continue
    const identifier = identifierOf(key)
    if (identifier && !identifier.inQuery) {
      return refuse('link-structure', `${nameOf(key)} belongs in the path of the link, not in its query.`)
    }
    const element = readElement(key, decode(rest.join('=').replaceAll('+', ' ')), today)
    if (!element.ok) return element
    elements.push(element.element)
  }
  return { ok: true, elements }
}

function readElement(
  ai: string,
  value: string | null,
  today: string,
): { readonly ok: true; readonly element: Element } | Refusal {
  const identifier = identifierOf(ai)
  if (!identifier) return refuse('unknown-ai', `No GS1 element is called ${ai}.`)
  if (value === null)
    return refuse('bad-character', `The ${nameOf(ai)} in the link is not written as text can be.`)
  return checkValue(identifier, value, today) ?? { ok: true, element: { ai, value } }
}

/** `null` where the percent signs do not spell text. */
function decode(text: string): string | null {
  try {
    return decodeURIComponent(text)
  } catch {
    return null
  }
}

/** Whether the qualifiers stand in the order of the sequence, each at most once. */
function inOrder(qualifiers: readonly string[], sequence: readonly string[]): boolean {
  const places = qualifiers.map((ai) => sequence.indexOf(ai))
  return places.every((place, index) => place > (places[index - 1] ?? -1))
}
