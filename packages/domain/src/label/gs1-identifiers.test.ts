import { describe, expect, test } from 'vitest'
import { readVectors, type Sourced } from '../../test/read-vectors.js'
import { beginsIdentifier, identifierAt, identifierOf } from './gs1-identifiers.js'
import { checkValue, hasGs1CheckPair } from './gs1-values.js'

interface TableVectors {
  ai_table: ({
    ai: string
    title: string
    format: string
    min_len: number
    max_len: number
    fnc1_separator_required: boolean
    dl_data_attribute: boolean
    requires: string[]
    excludes: string[]
  } & Sourced)[]
  predefined_length_by_first_two_digits: { table: Record<string, { data_len: number; total_len: number }> }
  charset82: { allowed: string; disallowed_printable_ascii: string }
}
const vectors = readVectors<TableVectors>('gs1')
const rows = vectors.ai_table.flatMap((row) =>
  row.ai === '91-99' ? ['91', '95', '99'].map((ai) => ({ ...row, ai })) : [row],
)
const codes = Array.from({ length: 9_000 }, (_, n) => String(n + 1_000)).concat(
  Array.from({ length: 1_100 }, (_, n) =>
    n < 100 ? String(n).padStart(2, '0') : String(n - 100).padStart(3, '0'),
  ),
)
const known = codes.filter((code) => identifierOf(code))

describe('the table of identifiers', () => {
  test.each(rows)('($ai) $title is $format ($source)', (row) => {
    const found = identifierOf(row.ai)
    expect(found).toMatchObject({
      minLength: row.min_len,
      maxLength: row.max_len,
      predefined: !row.fnc1_separator_required,
      inQuery: row.dl_data_attribute,
    })
    const sorted = (lists: readonly string[]) => lists.flatMap((list) => list.split(',')).sort()
    expect(sorted(found?.requires ?? [])).toEqual(sorted(row.requires))
    expect(sorted(found?.excludes ?? [])).toEqual(sorted(row.excludes))
  })

  test.each(Object.entries(vectors.predefined_length_by_first_two_digits.table))(
    'elements that begin with %s have the length that is predefined for them (GS1 Barcode Syntax Engine, ai.c)',
    (prefix, { total_len }) => {
      for (const ai of known.filter((one) => one.startsWith(prefix))) {
        const found = identifierOf(ai)
        expect(found?.predefined).toBe(true)
        expect(ai.length + (found?.maxLength ?? 0)).toBe(total_len)
        expect(found?.minLength).toBe(found?.maxLength)
      }
    },
  )

  test('nothing else is predefined, 23 in particular', () => {
    const prefixes = Object.keys(vectors.predefined_length_by_first_two_digits.table)
    expect(identifierOf('235')?.predefined).toBe(false)
    for (const ai of known) expect(identifierOf(ai)?.predefined).toBe(prefixes.includes(ai.slice(0, 2)))
  })

  test('no identifier is the beginning of another, so that a string is read in one way only', () => {
    expect(known.length).toBeGreaterThan(500)
    for (const ai of known) expect(known.filter((other) => other !== ai && other.startsWith(ai))).toEqual([])
  })

  test.each([
    ['0109', '01'],
    ['2351', '235'],
    ['7003', '7003'],
    ['310212', '3102'],
    ['95', '95'],
  ])('%s begins with (%s)', (text, ai) => {
    expect(identifierAt(text)?.ai).toBe(ai)
  })

  test.each(['89AB', '0512', '23', '1', ''])('%j begins with no identifier', (text) => {
    expect(identifierAt(text)).toBeUndefined()
  })

  test('a piece that could still become an identifier is told from one that could not', () => {
    expect(beginsIdentifier('70')).toBe(true)
    expect(beginsIdentifier('1')).toBe(true)
    expect(beginsIdentifier('89')).toBe(false)
    expect(beginsIdentifier('8999')).toBe(false)
  })
})

describe('checkValue', () => {
  const check = (ai: string, value: string) => {
    const identifier = identifierOf(ai)
    if (!identifier) throw new Error(`no identifier ${ai}`)
    return checkValue(identifier, value, '2026-12-01')
  }

  test('a lot may hold each of the 82 characters (GS1 Barcode Syntax Dictionary, cset82)', () => {
    expect([...vectors.charset82.allowed]).toHaveLength(82)
    for (const character of vectors.charset82.allowed) expect(check('10', `A${character}1`)).toBeNull()
  })

  test('a lot may hold no other printable character (same source)', () => {
    for (const character of vectors.charset82.disallowed_printable_ascii) {
      expect(check('10', `A${character}1`)).toMatchObject({ reason: 'bad-character' })
    }
  })

  test.each([
    ['8003', '1614141000014A', 'bad-character'],
    ['8003', '00614141000013', 'check-digit'],
    ['253', '1234567890129', 'check-digit'],
    ['7003', '2602291200', 'no-such-date'],
    ['7003', '2611312400', 'no-such-date'],
    ['7003', '2611302400', 'no-such-date'],
    ['7003', '2611301160', 'no-such-date'],
    ['7003', '261130116', 'truncated'],
    ['7003', '26113011600', 'data-too-long'],
    ['8008', '26113024', 'no-such-date'],
    ['8008', '2611302360', 'no-such-date'],
    ['8008', '261130235', 'no-such-date'],
    ['30', '12A', 'bad-character'],
    ['410', '9506000134353', 'check-digit'],
    ['00', '123456789012345674', 'check-digit'],
    ['8010', 'abc', 'bad-character'],
  ])('(%s)%s is refused: %s (derived from the formats)', (ai, value, reason) => {
    expect(check(ai, value)).toMatchObject({ ok: false, reason })
  })

  test.each([
    ['7003', '2611302359'],
    ['8008', '2611302359'],
    ['8008', '261130235959'],
    ['8008', '26113023'],
    ['8003', '01234567890128ABC'],
    ['253', '1234567890128XYZ'],
    ['00', '123456789012345675'],
    ['3102', '001750'],
    ['8030', 'aZ-_=9'],
  ])('(%s)%s is in order (derived from the formats)', (ai, value) => {
    expect(check(ai, value)).toBeNull()
  })
})

describe('hasGs1CheckPair', () => {
  test('1987654Ad4X4bL5ttr2310c2K is in order (example of the GS1 General Specifications; from memory)', () => {
    expect(hasGs1CheckPair('1987654Ad4X4bL5ttr2310c2K')).toBe(true)
  })

  test.each([
    '1987654Ad4X4bL5ttr2310cXK',
    '1987654Ad4X4bL5ttr2310c2L',
    '1987654Bd4X4bL5ttr2310c2K',
    '2K',
    '',
  ])('%j is not', (value) => {
    expect(hasGs1CheckPair(value)).toBe(false)
  })
})
