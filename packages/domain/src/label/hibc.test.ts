import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { from, readVectors, type Sourced } from '../../test/read-vectors.js'
import { hibcCheckCharacter, joinHibc, readHibc, readSecondary } from './hibc.js'
import type { LabelRefusal } from './label.js'
import { parseScan } from './scan.js'

interface HibcVectors {
  charset: { order: string; values: Record<string, number> } & Sourced
  date_flags: ({ flag: string; meaning: string; date_format: string | null } & Sourced)[]
  check_characters: ({
    data: string
    sum: number
    check_char_computed: string
    check_char_printed: string
    agrees: boolean
    full: string
    hri: string
  } & Sourced)[]
  secondary_parse: ({
    barcode: string
    expiry?: string
    expiry_month?: string
    lot?: string
    quantity?: number
  } & Sourced)[]
  parse_examples: ({
    barcode: string
    lic: string
    product: string
    unit_of_measure: string
    expiry: string
    lot: string
    serial?: string
    manufactured?: string
    check_valid: boolean
  } & Sourced)[]
  iccbba: ({ hri: string } & Sourced)[]
}
const vectors = readVectors<HibcVectors>('hibc')
const titled = <T extends Sourced>(rows: T[]) => rows.map((row) => ({ ...row, source: from(row) }))
const TODAY = '2026-12-01'
const checked = (data: string) => data + hibcCheckCharacter(data)
/** A second barcode of the product: its data, the first one's check character, its own. */
const second = (primary: string, data: string) => checked(`+${data}${hibcCheckCharacter(primary)}`)

describe('hibcCheckCharacter', () => {
  test.each(titled(vectors.check_characters))('$data sums to $sum: $check_char_computed ($source)', (row) => {
    expect(hibcCheckCharacter(row.data)).toBe(row.check_char_computed)
    expect(row.check_char_computed === row.check_char_printed).toBe(row.agrees)
  })

  test('43 characters have the values 0 to 42 (hibcc.org, m43/terms.htm)', () => {
    expect(vectors.charset.order).toHaveLength(43)
    for (const [value, character] of [...vectors.charset.order].entries()) {
      expect(vectors.charset.values[character]).toBe(value)
      expect(hibcCheckCharacter(character)).toBe(character)
    }
  })

  test.each(['+a123', '+A_1', '*+A123*'])('%s has none: it holds a character that HIBC has not', (data) => {
    expect(() => hibcCheckCharacter(data)).toThrow(RangeError)
  })

  test('any one character changed is refused', () => {
    const character = fc.constantFrom(...vectors.charset.order)
    fc.assert(
      fc.property(fc.constantFrom(...vectors.check_characters), fc.nat(), character, (row, where, other) => {
        const at = 1 + (where % (row.full.length - 1))
        fc.pre(row.full[at] !== other)
        const read = readHibc(`${row.full.slice(0, at)}${other}${row.full.slice(at + 1)}`, TODAY)
        expect(read).toMatchObject({ ok: false, reason: 'check-digit' })
      }),
    )
  })
})

describe('whole barcodes', () => {
  const primaries = titled(vectors.check_characters).filter((row) => /^\+[A-Z]/.test(row.data))

  test.each(primaries)('$full is read, printed with asterisks too ($source)', ({ full, hri }) => {
    expect(parseScan(full, TODAY)).toMatchObject({
      ok: true,
      label: { scheme: 'hibc', lic: full.slice(1, 5) },
    })
    expect(parseScan(hri, TODAY)).toEqual(parseScan(full, TODAY))
  })

  test.each(titled(vectors.parse_examples))('$barcode ($source)', (row) => {
    const scan = row.check_valid ? row.barcode : checked(row.barcode.slice(0, -1))
    if (!row.check_valid)
      expect(parseScan(row.barcode, TODAY)).toMatchObject({ ok: false, reason: 'check-digit' })
    const [useByOn, hour] = row.expiry.split('T')
    expect(readHibc(scan, TODAY)).toMatchObject({ ok: true, fields: { unitOfMeasure: row.unit_of_measure } })
    expect(parseScan(scan, TODAY)).toEqual({
      ok: true,
      label: {
        scheme: 'hibc',
        lic: row.lic,
        product: row.product,
        lot: row.lot,
        useByOn,
        ...(row.serial && { serial: row.serial }),
        ...(row.manufactured && { madeOn: row.manufactured }),
        warnings: hour ? ['use-by-has-hour'] : [],
      },
    })
  })

  test('the example that FDA, IMDRF and HL7 print ends in C where modulo 43 gives H (sum 834): refused as printed', () => {
    const data = '+H123PARTNO1234567890120/$$420020216LOT123456789012345/SXYZ456789012345678/16D20130202'
    expect(parseScan(`${data}C`, TODAY)).toMatchObject({ ok: false, reason: 'check-digit' })
    expect(parseScan(`${data}H`, TODAY)).toMatchObject({ ok: true, label: { useByOn: '2020-02-02' } })
  })

  test('+A999ABC123DE1/$+1234567Y of IMDRF N48, Appendix C, is refused as printed; Z is right (derived)', () => {
    expect(parseScan('+A999ABC123DE1/$+1234567Y', TODAY)).toMatchObject({ ok: false, reason: 'check-digit' })
    expect(parseScan('+A999ABC123DE1/$+1234567Z', TODAY)).toMatchObject({
      ok: true,
      label: { product: 'ABC123DE', serial: '1234567', warnings: ['no-lot', 'no-use-by'] },
    })
  })

  test.each([
    ['+/EO5232013', 'not-a-label'],
    ['+A123BJC5D6E71g', 'bad-character'],
    ['+a123bjc5d6e71g', 'bad-character'],
    ['+A9', 'truncated'],
    [checked('+A9991'), 'truncated'],
    [checked('+A999ABC'), 'bad-character'],
    [checked('+A999A.C1'), 'bad-character'],
    [checked('+A99912345678901234567890'), 'data-too-long'],
    [checked('+A99912345/XYZ'), 'unknown-flag'],
    [checked('+A99912345/'), 'unknown-flag'],
    [checked('+A99912345/14D2028113'), 'truncated'],
    [checked('+A99912345/14D202811300'), 'data-too-long'],
    [checked('+A99912345/14D20281131'), 'no-such-date'],
    [checked('+A99912345/$L1/$L2'), 'conflicting-values'],
    [checked('+A99912345/$$3281130L1/14D20281129'), 'conflicting-values'],
    [checked('+A99912345/S'), 'empty-value'],
    [checked('+A99912345/QX'), 'bad-character'],
  ] as [string, LabelRefusal][])('%s is refused: %s (derived)', (scan, reason) => {
    expect(parseScan(scan, TODAY)).toMatchObject({ ok: false, reason })
  })

  test.each(titled(vectors.iccbba))('$hri is of a scheme that is not read ($source)', ({ hri }) => {
    expect(parseScan(hri, TODAY)).toMatchObject({ ok: false, reason: 'unsupported-scheme' })
  })
})

describe('secondary data', () => {
  test.each(titled(vectors.secondary_parse))('$barcode, L and C left out ($source)', (row) => {
    const [day, hour] = (row.expiry ?? (row.expiry_month && `${row.expiry_month}-30`))?.split('T') ?? []
    expect(readSecondary(row.barcode.slice(1, -2), TODAY)).toEqual({
      ok: true,
      fields: {
        ...(row.quantity && { quantity: row.quantity }),
        ...(day && { useByOn: day }),
        ...(hour && { useByHour: Number(hour) }),
        ...(row.lot && { lot: row.lot }),
      },
    })
  })

  const written: Readonly<Record<string, string>> = {
    MMYY: '1128',
    MMDDYY: '113028',
    YYMMDD: '281130',
    YYMMDDHH: '28113016',
    YYJJJ: '28335',
    YYJJJHH: '2833516',
    YYYYMMDD: '20281130',
  }
  const flags = titled(vectors.date_flags).filter((row) => row.flag !== '+')
  test.each(flags)('$flag: $meaning, date $date_format ($source)', ({ flag, date_format }) => {
    const date = date_format === null ? '' : (written[date_format] ?? 'missing')
    const kind = /^\/1[46]D/.test(flag) ? null : flag.includes('+') || flag === '/S' ? 'serial' : 'lot'
    const day = '2028-11-30'
    expect(readSecondary(`${flag.replace('/', '')}${date}${kind ? '3C001' : ''}`, TODAY)).toEqual({
      ok: true,
      fields: {
        ...(kind && { [kind]: '3C001' }),
        ...(date && { [flag === '/16D' ? 'madeOn' : 'useByOn']: day }),
        ...(date_format?.endsWith('HH') && { useByHour: 16 }),
      },
    })
  })

  test('$$4 is a day and an hour: 20020216 is 2 February 2020, 16 h, not the 16th (IMDRF N48, table)', () => {
    expect(readSecondary('$$420020216L', TODAY)).toMatchObject({
      fields: { useByOn: '2020-02-02', useByHour: 16 },
    })
  })

  test.each([
    ['$', 'empty-value'],
    ['$$7', 'empty-value'],
    ['$$', 'unknown-flag'],
    ['$$+', 'unknown-flag'],
    ['$$+824', 'unknown-flag'],
    ['$$AB', 'unknown-flag'],
    ['X', 'unknown-flag'],
    ['$$1328L', 'no-such-date'],
    ['$$0028L', 'no-such-date'],
    ['$$3270229L', 'no-such-date'],
    ['$$3271100L', 'no-such-date'],
    ['$$427113024L', 'no-such-date'],
    ['$$527366L', 'no-such-date'],
    ['$$527000L', 'no-such-date'],
    ['$$32811', 'truncated'],
    ['$$3A81130', 'bad-character'],
    ['$$82', 'truncated'],
    ['$$8A2', 'bad-character'],
    ['$1234567890123456789', 'lot-too-long'],
    ['$+1234567890123456789', 'serial-too-long'],
    ['$$72345678901234567890', 'lot-too-long'],
  ] as [string, LabelRefusal][])('%s is refused: %s (derived)', (data, reason) => {
    expect(readSecondary(data, TODAY)).toMatchObject({ ok: false, reason })
  })

  test('a date without a lot is legal', () => {
    expect(readSecondary('$$3281130', TODAY)).toEqual({ ok: true, fields: { useByOn: '2028-11-30' } })
  })
})

describe('two barcodes of one package', () => {
  const primary = '+A123BJC5D6E71'

  test('the published pair: the second ends in the check character of the first (public test suite)', () => {
    expect(parseScan(['+A123BJC5D6E71G', '+2001510X3GG'], TODAY)).toEqual({
      ok: true,
      label: {
        scheme: 'hibc',
        lic: 'A123',
        product: 'BJC5D6E7',
        lot: '10X3',
        useByOn: '2020-01-15',
        warnings: [],
      },
    })
  })

  test('the order of the two does not matter', () => {
    expect(parseScan(['+2001510X3GG', '+A123BJC5D6E71G'], TODAY)).toEqual(
      parseScan(['+A123BJC5D6E71G', '+2001510X3GG'], TODAY),
    )
  })

  test('the second alone is legal and says so: it names no product', () => {
    expect(parseScan('+2001510X3GG', TODAY)).toMatchObject({
      ok: true,
      label: { lot: '10X3', useByOn: '2020-01-15', warnings: ['no-product'] },
    })
  })

  test('barcodes of two packages are refused by the link', () => {
    expect(parseScan(['+A123BJC5D6E71G', second('+A99912345', '$L1')], TODAY)).toMatchObject({
      ok: false,
      reason: 'link-mismatch',
    })
  })

  test('two products are refused', () => {
    expect(parseScan([checked(primary), checked('+A123BJC5D6E81')], TODAY)).toMatchObject({
      ok: false,
      reason: 'conflicting-values',
    })
  })

  test('two lots are refused, one lot given twice is not', () => {
    const first = checked(`${primary}/$L1`)
    expect(parseScan([first, second(primary, '$L2')], TODAY)).toMatchObject({ reason: 'conflicting-values' })
    expect(parseScan([first, second(primary, '$L1/S77')], TODAY)).toMatchObject({
      ok: true,
      label: { lot: 'L1', serial: '77' },
    })
  })

  test('joinHibc refuses nothing that agrees', () => {
    const one = { fields: { lot: 'L1' }, link: 'G' }
    expect(joinHibc(one, one)).toEqual({ ok: true, fields: { lot: 'L1' } })
  })
})
