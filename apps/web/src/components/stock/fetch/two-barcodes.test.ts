import type { Scan } from '@bellpull/contracts'
import { parseScan } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { joinBarcodes, missingHalf, type Reading } from './two-barcodes'

/** As the house reads: the same parser behind the same answers. */
const read = async (scan: Scan): Promise<Reading> => {
  const result = parseScan(scan, '2026-06-02')
  return result.ok ? { ok: true, label: { ...result.label, warnings: [...result.label.warnings] } } : result
}

const WHOLE = '0109521100100489' + '17281130' + '10L26A014'
const PRODUCT = '0109521100100489'
const LOT = '17281130' + '10L26A014'
const SERIAL = '21000731'
const OTHER_WHOLE = '0109521100200059' + '17281130' + '10L26B002'

describe('one label, one or two barcodes', () => {
  test.each<[string, string, string | null, object]>([
    ['a whole label', WHOLE, null, { kind: 'label', scan: WHOLE, setAside: null }],
    ['the product alone waits for its lot', PRODUCT, null, { kind: 'half', first: PRODUCT, missing: 'lot' }],
    [
      'the lot alone waits for its product',
      LOT,
      null,
      { kind: 'half', first: LOT, missing: 'product', label: null },
    ],
    [
      'a serial alone waits for its product',
      SERIAL,
      null,
      { kind: 'half', first: SERIAL, missing: 'product' },
    ],
    ['product, then lot', LOT, PRODUCT, { kind: 'label', scan: [PRODUCT, LOT], setAside: null }],
    ['lot, then product', PRODUCT, LOT, { kind: 'label', scan: [LOT, PRODUCT], setAside: null }],
    ['the same half twice', LOT, LOT, { kind: 'same', first: LOT }],
    [
      'half a label, then another whole one',
      OTHER_WHOLE,
      PRODUCT,
      { kind: 'label', scan: OTHER_WHOLE, setAside: PRODUCT },
    ],
    [
      'two halves without a product',
      '10L26A014',
      SERIAL,
      { kind: 'half', first: '10L26A014', missing: 'product' },
    ],
    ['rubbish', 'not a label', null, { kind: 'unreadable' }],
  ])('%s', async (_what, scanned, waiting, want) => {
    expect(await joinBarcodes(scanned, waiting, read)).toMatchObject(want)
  })

  test('rubbish after a half is named, and not sent on', async () => {
    expect(await joinBarcodes('0109521100100481', PRODUCT, read)).toMatchObject({
      kind: 'unreadable',
      reason: 'check-digit',
    })
  })

  test('a product without a lot can go on alone: its label is at hand', async () => {
    expect(await joinBarcodes(PRODUCT, null, read)).toMatchObject({ label: { gtin: '09521100100489' } })
  })
})

test('a label of a product that has only a serial number still lacks its lot', async () => {
  expect(missingHalf(await read(PRODUCT + SERIAL))).toBe('lot')
})
