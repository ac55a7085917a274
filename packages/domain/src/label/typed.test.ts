import { describe, expect, test } from 'vitest'
import type { LabelRefusal } from './label.js'
import { normaliseTyped, sameAsTyped } from './typed.js'

const TODAY = '2026-12-01'
const entry = { ref: 'SAL-H48', lot: 'L26A014', useByOn: '2028-11-30' }

describe('normaliseTyped', () => {
  test('a clean entry stays as it is', () => {
    expect(normaliseTyped(entry, TODAY)).toEqual({ ok: true, label: entry })
    expect(normaliseTyped({ ...entry, serial: '000731' }, TODAY)).toMatchObject({
      label: { serial: '000731' },
    })
  })

  test('spaces at the ends go, doubled ones within become one, a REF is in capitals, a lot stays as typed', () => {
    const typed = { ref: '  sal  h48 ', lot: ' l26a014\t', serial: '  ', useByOn: ' 2028-11-30 ' }
    expect(normaliseTyped(typed, TODAY)).toEqual({
      ok: true,
      label: { ref: 'SAL H48', lot: 'l26a014', useByOn: '2028-11-30' },
    })
  })

  test('a printed dash and full-width letters become those of a keyboard', () => {
    expect(normaliseTyped({ ...entry, ref: 'SAL\u2013H48', lot: '\uff2c26' }, TODAY)).toMatchObject({
      label: { ref: 'SAL-H48', lot: 'L26' },
    })
  })

  test.each([
    ['2028-11', '2028-11-30'],
    ['2028-02-00', '2028-02-29'],
    ['2027-02', '2027-02-28'],
  ])('use-by %s is the last day of the month, %s', (useByOn, day) => {
    expect(normaliseTyped({ ...entry, useByOn }, TODAY)).toMatchObject({ label: { useByOn: day } })
  })

  test('a use-by date in the past is still a date: whether the package is expired is judged elsewhere', () => {
    expect(normaliseTyped({ ...entry, useByOn: '2020-01-15' }, TODAY)).toMatchObject({ ok: true })
  })

  test.each<[string, object, LabelRefusal]>([
    ['no REF', { ref: ' ' }, 'empty-value'],
    ['no lot', { lot: '' }, 'empty-value'],
    ['no date', { useByOn: '' }, 'no-such-date'],
    ['a date the wrong way round', { useByOn: '30-11-2028' }, 'no-such-date'],
    ['a day that does not exist', { useByOn: '2027-02-29' }, 'no-such-date'],
    ['month 13', { useByOn: '2028-13' }, 'no-such-date'],
    ['a slip in the century', { useByOn: '2128-11-30' }, 'no-such-date'],
    ['a lot of 21 characters', { lot: 'ABCDEFGHIJKLMNOPQRSTU' }, 'lot-too-long'],
    ['a serial number of 21 characters', { serial: '123456789012345678901' }, 'serial-too-long'],
    ['a REF of 41 characters', { ref: 'R'.repeat(41) }, 'data-too-long'],
    ['a letter that no label prints', { lot: 'L\u00e426' }, 'bad-character'],
    ['a control character', { serial: '1\u001d2' }, 'bad-character'],
  ])('%s is refused', (_, change, reason) => {
    expect(normaliseTyped({ ...entry, ...change }, TODAY)).toMatchObject({ ok: false, reason })
  })
})

describe('sameAsTyped', () => {
  test.each([
    ['l26a014', 'L26A014'],
    ['L26 A014', 'L26A014'],
    ['L26\u2013A', 'L26-A'],
  ])('%j means %j', (typed, recorded) => {
    expect(sameAsTyped(typed, recorded)).toBe(true)
  })

  test.each([
    ['L26A014', 'L26A041'],
    ['L26A01', 'L26A014'],
    ['L26-A014', 'L26A014'],
    ['0', 'O'],
  ])('%j does not mean %j', (typed, recorded) => {
    expect(sameAsTyped(typed, recorded)).toBe(false)
  })
})
