import { describe, expect, test } from 'vitest'
import { from, readVectors, type Sourced } from '../../test/read-vectors.js'
import { splitCarrier } from './carrier.js'
import { readDigitalLink } from './digital-link.js'
import { labelFromElements, readBracketed, readElementString, type ElementsResult } from './gs1.js'
import type { LabelRefusal } from './label.js'
import { parseScan } from './scan.js'

type Pairs = [ai: string, value: string][]
type Expected = { valid: boolean; elements?: Pairs; error?: string }
interface Gs1Vectors {
  scans: ({ name: string; scan: string; expect: Expected } & Sourced)[]
  official_scan_tests: ({ scan: string; expect: Expected } & Sourced)[]
  bracketed: ({ bracketed: string; unbracketed: string | null; valid: boolean } & Sourced)[]
  digital_link_parse: ({ uri: string; expect: Expected } & Sourced)[]
  digital_link_generate: ({ bracketed: string; uri: string; canonical: string } & Sourced)[]
  symbology_identifiers: ({ id: string; name: string; meaning: string } & Sourced)[]
}
const vectors = readVectors<Gs1Vectors>('gs1')
const TODAY = '2026-12-01'

const scans = [
  ...vectors.scans,
  ...vectors.official_scan_tests.map((row) => ({ ...row, name: row.scan })),
].map((row) => ({ ...row, source: from(row) }))
const pairsOf = (read: ElementsResult) => (read.ok ? read.elements.map(({ ai, value }) => [ai, value]) : read)
const first = (elements: Pairs, ai: string) => elements.find((pair) => pair[0] === ai)?.[1]

/** Scans on which the house and GS1's engine differ, with what the house says and why. */
const HOUSE_DECIDES: Readonly<Record<string, string>> = {
  'no symbology id': 'accepted: scanners that work as a keyboard often send none',
  'expiry only, no key': 'accepted with a warning: it may be the second barcode of a package',
  'non-GS1 DM ]d1 (plain data)': 'refused: plain data is no label',
}

describe('scans, held against the reference engine of GS1', () => {
  const agreed = scans.filter((row) => !(row.name in HOUSE_DECIDES))

  test.each(agreed.filter((row) => row.expect.valid && row.expect.elements?.length))(
    '$name: elements as the engine reads them ($source)',
    ({ scan, expect: { elements = [] } }) => {
      const { kind, data } = splitCarrier(scan)
      const read = kind === 'elements' ? readElementString(data, TODAY) : readDigitalLink(data, TODAY)
      expect(pairsOf(read)).toEqual(elements)
      const result = parseScan(scan, TODAY)
      expect(result).toMatchObject({ ok: true, label: { scheme: 'gs1', gtin: first(elements, '01') } })
      expect(result.ok && result.label.lot).toBe(first(elements, '10'))
      expect(result.ok && result.label.serial).toBe(first(elements, '21'))
    },
  )

  test.each([
    ['EAN-13 ]E0', '09506000134352'],
    ['EAN-8 ]E4', '00000002345673'],
  ])('%s is GTIN %s', (name, gtin) => {
    const scan = scans.find((row) => row.name === name)?.scan ?? ''
    expect(parseScan(scan, TODAY)).toEqual({
      ok: true,
      label: { scheme: 'gs1', gtin, warnings: ['no-lot', 'no-use-by'] },
    })
  })

  const reasons: Readonly<Record<string, LabelRefusal>> = {
    'lot 21 chars': 'lot-too-long',
    'lot with space (not in cset82)': 'bad-character',
    'serial only, no GTIN (req 01)': 'serial-without-gtin',
    'dup GTIN conflicting': 'conflicting-values',
    'truncated GTIN': 'truncated',
    'unknown AI 89': 'unknown-ai',
    'empty lot': 'empty-value',
    'serial 21 chars': 'serial-too-long',
    'GS inside fixed AI (expiry cut short)': 'truncated',
    'caret in data (illegal)': 'bad-character',
    '30 with 9 digits (too long)': 'data-too-long',
    '02 content without 37/00': 'missing-companion',
    'duplicate lot different value': 'conflicting-values',
    '8014 M-UDI without check pair': 'check-digit',
    ']d2': 'empty',
    ']C1': 'empty',
    ']Q3': 'empty',
    ']C101123123123133^10ABC': 'bad-character',
    ']Q1https://a/NOPRIMARYAI': 'not-a-label',
  }
  const refused = agreed
    .filter((row) => !row.expect.valid)
    .map((row) => ({ ...row, error: row.expect.error, reason: reasons[row.name] }))

  test.each(refused)('$name is refused: $reason (engine: $error)', ({ scan, reason }) => {
    expect(reason).toBeDefined()
    expect(parseScan(scan, TODAY)).toMatchObject({
      ok: false,
      reason,
      detail: expect.stringMatching(/.{10,}\.$/),
    })
  })

  test('no symbology identifier: read as it stands', () => {
    expect(parseScan('01095060001343521726123110L1', TODAY)).toEqual({
      ok: true,
      label: { scheme: 'gs1', gtin: '09506000134352', lot: 'L1', useByOn: '2026-12-31', warnings: [] },
    })
  })

  test('use-by date alone: legal and incomplete, because it may be the second barcode of a package', () => {
    expect(parseScan(']d217281130', TODAY)).toEqual({
      ok: true,
      label: { scheme: 'gs1', useByOn: '2028-11-30', warnings: ['no-gtin', 'no-lot'] },
    })
  })

  test('element data in a plain Data Matrix is not a label: the carrier says so itself', () => {
    expect(parseScan(']d10109506000134352', TODAY)).toMatchObject({ ok: false, reason: 'not-a-label' })
  })

  test('every case in which the house differs is among the vectors and decided here', () => {
    expect(scans.filter((row) => row.name in HOUSE_DECIDES)).toHaveLength(3)
  })
})

describe('symbology identifiers', () => {
  test.each(vectors.symbology_identifiers.map((row) => ({ ...row, source: from(row) })))(
    '$id $name carries $meaning ($source)',
    ({ id, meaning }) => {
      const kind = meaning.startsWith('AI data') ? 'elements' : meaning.startsWith('GTIN') ? 'gtin' : 'plain'
      expect(splitCarrier(`${id}X`)).toEqual({ kind, id, data: 'X' })
    },
  )

  test.each([']D2', ']c1', ']q3', ']X9', ']'])('%s is none: capitals and small letters differ', (id) => {
    expect(parseScan(`${id}0109506000134352`, TODAY)).toMatchObject({
      ok: false,
      reason: 'unknown-symbology',
    })
  })
})

describe('bracketed text', () => {
  const rows = vectors.bracketed.map((row) => ({ ...row, source: from(row) }))

  test.each(rows.filter((row) => row.valid))('$bracketed is the scan $unbracketed ($source)', (row) => {
    const scan = (row.unbracketed ?? '').slice(1).replaceAll('^', '\u001d')
    expect(readBracketed(row.bracketed, TODAY)).toEqual(readElementString(scan, TODAY))
    expect(parseScan(row.bracketed, TODAY)).toMatchObject({ ok: true })
  })

  const reasons: Readonly<Record<string, LabelRefusal>> = {
    '(10)(11)98765': 'empty-value',
    '(1A)12345': 'unknown-ai',
    '()12345': 'unknown-ai',
    '(12345)12345': 'unknown-ai',
    '(01)123456789012312(10)12345': 'data-too-long',
    '(10)12345^': 'bad-character',
    '(17)9(90)217': 'truncated',
  }
  test.each(rows.filter((row) => !row.valid))('$bracketed is refused ($source)', ({ bracketed }) => {
    expect(reasons[bracketed]).toBeDefined()
    expect(parseScan(bracketed, TODAY)).toMatchObject({ ok: false, reason: reasons[bracketed] })
  })

  test('spaces between the elements, as people print them, do no harm; inside a lot they are refused', () => {
    expect(parseScan(' (01) 09506000134352 (10) L1 (17) 281130 ', TODAY)).toMatchObject({
      ok: true,
      label: { gtin: '09506000134352', lot: 'L1', useByOn: '2028-11-30', warnings: [] },
    })
    expect(parseScan('(10)L 1', TODAY)).toMatchObject({ ok: false, reason: 'bad-character' })
  })

  test('an opened bracket that is not closed is refused', () => {
    expect(parseScan('(01', TODAY)).toMatchObject({ ok: false, reason: 'unknown-ai' })
  })
})

describe('GS1 Digital Link', () => {
  const links = vectors.digital_link_parse.map((row) => ({ ...row, source: from(row) }))

  test.each(links.filter((row) => row.expect.valid))('$uri ($source)', ({ uri, expect: { elements } }) => {
    expect(pairsOf(readDigitalLink(uri, TODAY))).toEqual(elements)
    expect(parseScan(uri, TODAY)).toMatchObject({ ok: true })
  })

  const reasons: Readonly<Record<string, LabelRefusal>> = {
    'https://a/01/2112345678900': 'truncated',
    'https://example.com/01/09506000134352/21/S1/10/L1': 'link-structure',
    'https://example.com/01/09506000134353': 'check-digit',
    'https://example.com/01/09506000134352?17=281331': 'no-such-date',
    'https://example.com/01/09506000134352/10/LOT%20A': 'bad-character',
  }
  test.each(links.filter((row) => !row.expect.valid))('$uri is refused ($source)', ({ uri }) => {
    expect(reasons[uri]).toBeDefined()
    expect(parseScan(uri, TODAY)).toMatchObject({ ok: false, reason: reasons[uri] })
  })

  test.each(vectors.digital_link_generate)('$uri says what $bracketed says ($source)', (row) => {
    const expected = parseScan(row.bracketed, TODAY)
    expect(expected).toMatchObject({ ok: true })
    expect(parseScan(row.uri, TODAY)).toEqual(expected)
    expect(parseScan(row.canonical, TODAY)).toEqual(expected)
  })

  test.each([
    ['HTTPS://EXAMPLE.COM/01/09506000134352', '09506000134352', undefined],
    ['http://example.com:8080/some/stem/01/09506000134352/10/A+B#frag/ment?x', '09506000134352', 'A+B'],
    ['https://example.com/01/09506000134352/10/A%28B?lang=en&x', '09506000134352', 'A(B'],
    ['https://example.com/01/09506000134352/10/L1?17=281130;11=261001', '09506000134352', 'L1'],
  ])('%s is legal (rules of the engine; derived)', (uri, gtin, lot) => {
    const result = parseScan(uri, TODAY)
    expect(result).toMatchObject({ ok: true, label: { gtin } })
    expect(result.ok && result.label.lot).toBe(lot)
  })

  test.each([
    ['HtTpS://example.com/01/09506000134352', 'not-a-label'],
    ['https://example.com/gtin/09506000134352', 'not-a-label'],
    ['https://example.com', 'not-a-label'],
    ['https://example.com/', 'not-a-label'],
    ['https://example.com/constructor/1', 'not-a-label'],
    ['https:///01/09506000134352', 'not-a-label'],
    ['https://example.com/01/09506000134352/235/T/10/L', 'link-structure'],
    ['https://example.com/01/09506000134352/10/L/10/L', 'link-structure'],
    ['https://example.com/01/09506000134352/99/X', 'link-structure'],
    ['https://example.com/01/09506000134352?21=S1', 'link-structure'],
    ['https://example.com/01/09506000134352?89=S1', 'unknown-ai'],
    ['https://example.com/01/09506000134352?17=', 'empty-value'],
    ['https://example.com/01/09506000134352/10/', 'empty-value'],
    ['https://example.com/01/09506000134352/10/%E0%A4', 'bad-character'],
    ['https://example.com/01/09506000134352?240=A+B', 'bad-character'],
    ['https://example.com/01/09506000134352/10/Ä', 'bad-character'],
    ['https://example.com/01/09506000134352/10/L1?10=L2', 'conflicting-values'],
  ])('%s is refused: %s (rules of the engine; derived)', (uri, reason) => {
    expect(parseScan(uri, TODAY)).toMatchObject({ ok: false, reason })
  })
})

describe('what goes together on one package', () => {
  const judge = (...elements: Pairs) =>
    labelFromElements(
      elements.map(([ai, value]) => ({ ai, value })),
      TODAY,
    )
  const GTIN: Pairs[number] = ['01', '09506000134352']

  test.each<[string, LabelRefusal, Pairs]>([
    ['a GTIN and a count of trade items', 'forbidden-pair', [GTIN, ['37', '5']]],
    ['a serial number and a third-party serial number', 'forbidden-pair', [GTIN, ['21', 'S'], ['235', 'T']]],
    ['a second serial number without the first', 'missing-companion', [GTIN, ['250', 'S2']]],
    ['a due date without a payment reference', 'missing-companion', [GTIN, ['12', '281130']]],
    ['two use-by days that differ', 'conflicting-values', [GTIN, ['17', '281130'], ['7003', '2811291200']]],
    ['a serial number alone', 'serial-without-gtin', [['21', 'S']]],
    [
      'a serial number with lot and date but no GTIN',
      'serial-without-gtin',
      [
        ['10', 'L'],
        ['17', '281130'],
        ['21', 'S'],
      ],
    ],
  ])('%s is refused: %s (rules of the GS1 dictionary)', (_, reason, elements) => {
    expect(judge(...elements)).toMatchObject({ ok: false, reason })
  })

  test('a second serial number with the first is in order', () => {
    expect(judge(GTIN, ['21', 'S'], ['250', 'S2'])).toMatchObject({ ok: true, label: { serial: 'S' } })
  })

  test('a carton of contents has no GTIN of its own', () => {
    expect(judge(['00', '123456789012345675'], ['02', '09506000134352'], ['37', '5'])).toEqual({
      ok: true,
      label: { scheme: 'gs1', warnings: ['no-gtin', 'no-lot', 'no-use-by'] },
    })
  })

  test('a product made to order is known by its own GTIN (03)', () => {
    expect(judge(['03', '09506000134352'])).toMatchObject({ ok: true, label: { gtin: '09506000134352' } })
  })

  test('an hour of expiry gives the day, and is warned of', () => {
    expect(judge(GTIN, ['10', 'L'], ['7003', '2811301545'])).toMatchObject({
      ok: true,
      label: { useByOn: '2028-11-30', warnings: ['use-by-has-hour'] },
    })
  })

  test('a use-by date before the date of manufacture is warned of', () => {
    expect(judge(GTIN, ['10', 'L'], ['11', '271201'], ['17', '271130'])).toMatchObject({
      ok: true,
      label: { madeOn: '2027-12-01', useByOn: '2027-11-30', warnings: ['use-by-before-made'] },
    })
  })
})
