import { describe, expect, test } from 'vitest'
import { hibcCheckCharacter } from './hibc.js'
import { LABEL_REFUSALS, LABEL_WARNINGS, type LabelRefusal } from './label.js'
import { parseScan } from './scan.js'

const TODAY = '2026-12-01'
const GS = '\u001d'
const GTIN = '09506000134352'
const FULL = `01${GTIN}1728113010L26A014${GS}21000731`
const full = {
  ok: true,
  label: { scheme: 'gs1', gtin: GTIN, lot: 'L26A014', serial: '000731', useByOn: '2028-11-30', warnings: [] },
}
const refusal = (reason: LabelRefusal) => ({ ok: false, reason })

describe('a scanner that works as a keyboard', () => {
  test.each([
    ['carriage return behind', `${FULL}\r`],
    ['carriage return and line feed behind', `${FULL}\r\n`],
    ['tabulator behind', `${FULL}\t`],
    ['start and end of text around', `\u0002${FULL}\u0003`],
    ['byte order mark before', `\ufeff${FULL}`],
    ['space before', ` ${FULL}`],
    ['first FNC1 sent as GS', `${GS}${FULL}`],
    ['symbology identifier and GS', `]d2${GS}${FULL}`],
    ['GS at the end', `]d2${FULL}${GS}`],
    ['GS behind an element of fixed length', FULL.replace('17281130', `${GS}17281130${GS}`)],
    ['GS as its picture', FULL.replace(GS, '\u241d')],
    ['GS as {GS}', FULL.replace(GS, '{GS}')],
    ['GS as [GS]', FULL.replace(GS, '[GS]')],
    ['GS as the letters of its code', FULL.replace(GS, '\\u001d')],
    ['GS as the letters of its code, short', FULL.replace(GS, '\\x1D')],
    ['GS-128', `]C1${FULL}`],
    ['GS1 QR code', `]Q3${FULL}`],
    ['DataBar', `]e0${FULL}`],
    ['DotCode', `]J1${FULL}`],
  ])('%s: the label is read', (_, scan) => {
    expect(parseScan(scan, TODAY)).toEqual(full)
  })

  test('GS as <GS>: a lot could hold it and none does, so it is read as a separator and warned of', () => {
    expect(parseScan(FULL.replace(GS, '<GS>'), TODAY)).toEqual({
      ok: true,
      label: { ...full.label, warnings: ['separator-as-text'] },
    })
  })

  test.each(['^', '|', '~', '#', ' ', '$'])('a separator turned into %j is refused, not guessed', (sign) => {
    expect(parseScan(FULL.replace(GS, sign), TODAY)).toMatchObject(refusal('bad-character'))
  })

  test('two separators with nothing between are refused', () => {
    expect(parseScan(FULL.replace(GS, GS + GS), TODAY)).toMatchObject(refusal('empty-value'))
  })

  test('a check character of HIBC that is a space is kept, with a line feed behind it and printed as _', () => {
    const read = { ok: true, label: { scheme: 'hibc', lic: 'A999', product: 'X39' } }
    expect(hibcCheckCharacter('+A999X391')).toBe(' ')
    expect(parseScan('+A999X391 ', TODAY)).toMatchObject(read)
    expect(parseScan('+A999X391 \r\n', TODAY)).toMatchObject(read)
    expect(parseScan('+A999X391_', TODAY)).toMatchObject(read)
    expect(parseScan('+A999X391', TODAY)).toMatchObject(refusal('check-digit'))
  })

  test.each([
    ['', 'empty'],
    ['   ', 'empty'],
    ['\r\n', 'empty'],
    [']d2', 'empty'],
    [GS, 'empty'],
    ['hello', 'unknown-ai'],
    ['01', 'empty-value'],
    [`01${GTIN}1`, 'truncated'],
    [`01${GTIN}70`, 'truncated'],
    [`01${GTIN}172811`, 'truncated'],
    [`01${GTIN}17281331`, 'no-such-date'],
    [`01${GTIN}17270431`, 'no-such-date'],
    [`01${GTIN}17270229`, 'no-such-date'],
    ['0109506000134353', 'check-digit'],
    ['0109506000I34352', 'bad-character'],
    [']d1+A123BJC5D6E71H', 'check-digit'],
    [']C0hello', 'not-a-label'],
    ['[)>\u001e06\u001d9S1\u001e\u0004', 'unsupported-scheme'],
  ] as [string, LabelRefusal][])('%j is refused: %s', (scan, reason) => {
    expect(parseScan(scan, TODAY)).toMatchObject({
      ...refusal(reason),
      detail: expect.stringMatching(/.{10,}\.$/),
    })
  })

  test('HIBC in the carriers that it uses', () => {
    for (const id of ['', ']d1', ']C0', ']A0', ']Q1']) {
      expect(parseScan(`${id}+A123BJC5D6E71G`, TODAY)).toMatchObject({ ok: true, label: { lic: 'A123' } })
    }
  })

  test('a house without a day is the fault of the caller', () => {
    expect(() => parseScan(FULL, 'today')).toThrow(RangeError)
  })
})

describe('what may be wrong with a legal label', () => {
  const warnings = (scan: string) => {
    const result = parseScan(scan, TODAY)
    return result.ok ? result.label.warnings : result
  }

  test('a lot that swallowed the use-by date behind it is legal, and warned of', () => {
    expect(parseScan(`]d201${GTIN}10ABC12317261231`, TODAY)).toEqual({
      ok: true,
      label: {
        scheme: 'gs1',
        gtin: GTIN,
        lot: 'ABC12317261231',
        warnings: ['no-use-by', 'lot-may-hold-date'],
      },
    })
  })

  test.each([
    ['date, then a serial number', '10AB1726123121S7'],
    ['a whole lot of digits', '101728113021'],
    ['day 00', '10AB17260200'],
  ])('also warned of: %s', (_, element) => {
    expect(warnings(`01${GTIN}${element}`)).toContain('lot-may-hold-date')
  })

  test('a serial number that swallowed date and lot is warned of', () => {
    expect(warnings(`01${GTIN}21SN717281130`)).toEqual(['no-lot', 'no-use-by', 'serial-may-hold-date'])
    expect(warnings(`01${GTIN}21SN71728113010L1`)).toContain('serial-may-hold-date')
  })

  test.each([
    ['17 and no date', '10ABC17261331'],
    ['a date that does not exist', '10ABC17270229'],
    ['a date that ends before the lot does', '10ABC17261231X'],
  ])('not warned of: %s', (_, element) => {
    expect(warnings(`01${GTIN}${element}`)).toEqual(['no-use-by'])
  })

  test('a label that has its use-by date has swallowed none', () => {
    expect(warnings(`01${GTIN}1728113010ABC17261231`)).toEqual([])
  })

  test.each([
    [`01${GTIN}`, ['no-lot', 'no-use-by']],
    [`01${GTIN}10L1`, ['no-use-by']],
    [`01${GTIN}17281130`, ['no-lot']],
    ['10L1', ['no-gtin', 'no-use-by']],
    [`1728113010L1${GS}`, ['no-gtin']],
    ['+A123BJC5D6E71G', ['no-lot', 'no-use-by']],
  ])('%j is legal and incomplete: %j', (scan, expected) => {
    expect(warnings(scan)).toEqual(expected)
  })

  test('every name is used once', () => {
    expect(new Set(LABEL_REFUSALS).size).toBe(LABEL_REFUSALS.length)
    expect(new Set(LABEL_WARNINGS).size).toBe(LABEL_WARNINGS.length)
  })
})

describe('two barcodes of one package', () => {
  test.each([
    ['GTIN, then date, lot and serial number', [`01${GTIN}`, `1728113010L26A014${GS}21000731`]],
    ['the other way round', [`1728113010L26A014${GS}21000731`, `01${GTIN}`]],
    ['both with the GTIN', [`01${GTIN}17281130`, `01${GTIN}10L26A014${GS}21000731`]],
    ['EAN-13, then the rest', [`]E09506000134352`, `]C11728113010L26A014${GS}21000731`]],
    ['bare EAN-13, then the rest', ['9506000134352', `1728113010L26A014${GS}21000731`]],
    ['printed text for one', [`(01)${GTIN}`, `(17)281130(10)L26A014(21)000731`]],
  ] as [string, [string, string]][])('%s: one label, judged together', (_, scan) => {
    expect(parseScan(scan, TODAY)).toEqual(full)
  })

  test('the serial number needs the GTIN of the other barcode: alone it is refused, with it not', () => {
    for (const scan of ['21000731', ']C121000731']) {
      expect(parseScan(scan, TODAY)).toMatchObject(refusal('serial-without-gtin'))
      expect(parseScan([`01${GTIN}`, scan], TODAY)).toMatchObject({ ok: true, label: { serial: '000731' } })
    }
  })

  test.each([
    ['two products', [`01${GTIN}`, '0109506000117843'], 'conflicting-values'],
    ['two lots', [`01${GTIN}10A1`, '10A2'], 'conflicting-values'],
    ['two dates', [`01${GTIN}17281130`, '17281129'], 'conflicting-values'],
    ['one GS1, one HIBC', [`01${GTIN}`, '+A123BJC5D6E71G'], 'mixed-schemes'],
    ['one HIBC, one GS1', ['+A123BJC5D6E71G', `01${GTIN}`], 'mixed-schemes'],
    ['the second empty', [`01${GTIN}`, ''], 'empty'],
    ['the first empty', ['', `01${GTIN}`], 'empty'],
    ['the second unreadable', [`01${GTIN}`, '10'], 'empty-value'],
    ['a count of contents on the second', [`01${GTIN}`, '375'], 'forbidden-pair'],
  ] as [string, [string, string], LabelRefusal][])('%s: refused, %s', (_, scan, reason) => {
    expect(parseScan(scan, TODAY)).toMatchObject(refusal(reason))
  })

  test('one barcode scanned twice says what it says once', () => {
    expect(parseScan([`01${GTIN}10A1`, `01${GTIN}10A1`], TODAY)).toEqual(parseScan(`01${GTIN}10A1`, TODAY))
  })
})

describe('bare digits', () => {
  test.each([
    ['EAN-13', '9506000134352', GTIN],
    ['UPC-A', '416000336108', '00416000336108'],
    ['EAN-8', '02345673', '00000002345673'],
    ['GTIN-14', '51022222233336', '51022222233336'],
    ['EAN-13 named by the scanner', ']E09506000134352', GTIN],
    ['UPC-A named by the scanner', ']E0416000336108', '00416000336108'],
    ['ITF-14 named by the scanner', ']I151022222233336', '51022222233336'],
  ])('%s %s is GTIN %s', (_, scan, gtin) => {
    expect(parseScan(scan, TODAY)).toEqual({
      ok: true,
      label: { scheme: 'gs1', gtin, warnings: ['no-lot', 'no-use-by'] },
    })
  })

  test('a use-by date alone has the length of an EAN-8; its check digit says that it is none', () => {
    expect(parseScan('17281130', TODAY)).toMatchObject({ ok: true, label: { useByOn: '2028-11-30' } })
  })

  // Weights 3,1,... over 1728111 give 1*3+1+1*3+8+2*3+7+1*3 = 31, so 9 is the check digit of an EAN-8.
  const BOTH = '17281119'
  test('digits that are a GTIN and a date as well are refused rather than guessed', () => {
    expect(parseScan(BOTH, TODAY)).toMatchObject(refusal('ambiguous'))
  })

  test('beside the barcode with the GTIN they are the date, beside one without it the GTIN', () => {
    expect(parseScan([`01${GTIN}`, BOTH], TODAY)).toMatchObject({
      ok: true,
      label: { gtin: GTIN, useByOn: '2028-11-19' },
    })
    expect(parseScan([BOTH, '10L1'], TODAY)).toMatchObject({
      ok: true,
      label: { gtin: `000000${BOTH}`, lot: 'L1' },
    })
  })

  test('an EAN-13 that could be a serial number is one only beside a barcode with the GTIN', () => {
    expect(parseScan('2112345678900', TODAY)).toMatchObject({ ok: true, label: { gtin: '02112345678900' } })
    expect(parseScan(['2112345678900', '10L1'], TODAY)).toMatchObject({ label: { gtin: '02112345678900' } })
    expect(parseScan(['2112345678900', `01${GTIN}`], TODAY)).toMatchObject({
      label: { serial: '12345678900' },
    })
  })

  test('two barcodes that could both be either stay unsettled', () => {
    expect(parseScan([BOTH, '2112345678900'], TODAY)).toMatchObject(refusal('ambiguous'))
  })

  test('with a symbology identifier nothing is in doubt', () => {
    expect(parseScan(`]C1${BOTH}`, TODAY)).toMatchObject({ ok: true, label: { useByOn: '2028-11-19' } })
    expect(parseScan(`]E4${BOTH}`, TODAY)).toMatchObject({ ok: true, label: { gtin: `000000${BOTH}` } })
  })

  test.each([
    ['9506000134353', 'check-digit'],
    [']E09506000134353', 'check-digit'],
    [']E095060001343', 'truncated'],
    [']E0095060001343525', 'data-too-long'],
    [']E4416000336108', 'data-too-long'],
    [']I19506000134352', 'truncated'],
    [']E4', 'truncated'],
    [']E0950600013435X', 'bad-character'],
  ] as [string, LabelRefusal][])('%s is refused: %s', (scan, reason) => {
    expect(parseScan(scan, TODAY)).toMatchObject(refusal(reason))
  })
})
