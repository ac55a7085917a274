import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { toBuffer } from 'bwip-js/node'
import { prepareZXingModule, readBarcodes } from 'zxing-wasm/reader'
import { beforeAll, describe, expect, test } from 'vitest'
import { hibcCheckCharacter } from './hibc.js'
import { parseScan } from './scan.js'

/*
 * Real barcodes: one independent library draws them, another reads the picture, our parser reads its text.
 * bwip-js refuses to draw what is not legal, so it is a second opinion on that too.
 */

const TODAY = '2026-12-01'

beforeAll(async () => {
  // From the installed file: nothing is fetched.
  const wasmBinary = readFileSync(
    createRequire(import.meta.url).resolve('zxing-wasm/reader/zxing_reader.wasm'),
  )
  const bytes = wasmBinary.buffer.slice(wasmBinary.byteOffset, wasmBinary.byteOffset + wasmBinary.byteLength)
  await prepareZXingModule({ overrides: { wasmBinary: bytes }, fireImmediately: true })
})

const draw = (bcid: string, text: string) =>
  toBuffer({
    bcid,
    text,
    scale: 3,
    backgroundcolor: 'FFFFFF',
    paddingwidth: 10,
    paddingheight: 10,
    ...(bcid.includes('128') && { height: 15 }),
  })

/** What a scanner would send: symbology identifier and text. */
async function scanOf(bcid: string, text: string): Promise<{ id: string; text: string }> {
  const [found, ...others] = await readBarcodes(new Uint8Array(await draw(bcid, text)), { tryHarder: true })
  if (!found?.isValid || others.length > 0)
    throw new Error(`${bcid} did not read back: ${found?.error ?? 'nothing'}`)
  return {
    id: found.symbologyIdentifier,
    text: found.bytes.reduce((all, byte) => all + String.fromCharCode(byte), ''),
  }
}

const FULL = '(01)09506000134352(10)ABC123(17)261231(21)SN-0007'
// No % among the signs: in a GS1 QR code the two libraries differ on it beside small letters (one doubles it).
const LABELS = [
  FULL,
  '(01)51022222233336(11)141231(17)150707(10)A213B1(21)1234',
  '(01)09521100100489(17)281130(10)L26A014(21)000731',
  '(01)09506000134352(17)280200(10)L1',
  '(01)09506000134352(10)a_B-+/*.,:;<=>?!(21)x"Y&z\'',
]

describe('GS1, drawn by bwip-js and read by zxing-wasm', () => {
  test.each(
    ['gs1datamatrix', 'gs1-128', 'gs1qrcode'].flatMap((bcid) => LABELS.map((text) => [bcid, text] as const)),
  )('%s %s says what its printed text says', async (bcid, text) => {
    const scan = await scanOf(bcid, text)
    const printed = parseScan(text, TODAY)
    expect(printed).toMatchObject({ ok: true })
    expect(scan.id).toBe({ gs1datamatrix: ']d2', 'gs1-128': ']C1', gs1qrcode: ']Q3' }[bcid])
    expect(parseScan(scan.id + scan.text, TODAY)).toEqual(printed)
    expect(parseScan(scan.text, TODAY)).toEqual(printed)
  })

  test('two GS1-128 barcodes of one package', async () => {
    const first = await scanOf('gs1-128', '(01)09506000134352')
    const second = await scanOf('gs1-128', '(17)261231(10)ABC123')
    expect(parseScan([first.id + first.text, second.id + second.text], TODAY)).toEqual(
      parseScan('(01)09506000134352(17)261231(10)ABC123', TODAY),
    )
  })

  test.each([
    ['ean13', '9506000134352', ']E0', '09506000134352'],
    ['ean8', '02345673', ']E4', '00000002345673'],
    ['upca', '416000336108', ']E0', '00416000336108'],
    ['itf14', '51022222233336', ']I1', '51022222233336'],
  ])('%s %s', async (bcid, text, id, gtin) => {
    const scan = await scanOf(bcid, text)
    expect(scan.id).toBe(id)
    expect(parseScan(scan.id + scan.text, TODAY)).toMatchObject({ ok: true, label: { gtin } })
    expect(parseScan(scan.text, TODAY)).toMatchObject({ ok: true, label: { gtin } })
  })

  test('a Digital Link in a QR code', async () => {
    const uri = 'https://example.com/01/09506000134352/10/ABC123/21/SN-0007?17=261231'
    const scan = await scanOf('qrcode', uri)
    expect(scan.id).toBe(']Q1')
    expect(parseScan(scan.id + scan.text, TODAY)).toEqual(parseScan(FULL, TODAY))
  })

  test.each([
    ['(01)09506000134353', 'check-digit'],
    ['(01)09506000134352(17)261331', 'no-such-date'],
    ['(01)09506000134352(17)270229', 'no-such-date'],
    ['(01)09506000134352(10)A#B', 'bad-character'],
    ['(01)09506000134352(10)ABCDEFGHIJKLMNOPQRSTU', 'lot-too-long'],
    ['(8013)1987654Ad4X4bL5ttr2310cXK', 'check-digit'],
  ])('%s: bwip-js will not draw it, and it is refused here: %s', async (text, reason) => {
    await expect(draw('gs1datamatrix', text)).rejects.toThrow()
    expect(parseScan(text, TODAY)).toMatchObject({ ok: false, reason })
  })

  test('(8013)1987654Ad4X4bL5ttr2310c2K: bwip-js draws it, and its check pair is in order here', async () => {
    await expect(draw('gs1datamatrix', '(8013)1987654Ad4X4bL5ttr2310c2K')).resolves.toBeInstanceOf(Buffer)
    expect(parseScan('(8013)1987654Ad4X4bL5ttr2310c2K', TODAY)).toMatchObject({ ok: true })
  })
})

describe('HIBC, drawn by bwip-js and read by zxing-wasm', () => {
  const data = [
    'A123BJC5D6E71',
    'H123ABC01234567890',
    'A123BJC5D6E71/$$52001510X3',
    'A99912345/$$52001510X3/16D20111212/S77DE1G45',
    'H123PARTNO1234567890120/$$420020216LOT123456789012345/SXYZ456789012345678/16D20130202',
    'A999X391',
  ]

  // bwip-js adds the leading + and the check character itself, so the two libraries vouch for ours.
  test.each(['hibcdatamatrix', 'hibccode128'].flatMap((bcid) => data.map((text) => [bcid, text] as const)))(
    '%s %s has the check character that we compute',
    async (bcid, text) => {
      const scan = await scanOf(bcid, text)
      expect(scan.id).toBe({ hibcdatamatrix: ']d1', hibccode128: ']C0' }[bcid])
      expect(scan.text).toBe(`+${text}${hibcCheckCharacter(`+${text}`)}`)
      expect(parseScan(scan.id + scan.text, TODAY)).toMatchObject({
        ok: true,
        label: { lic: text.slice(0, 4) },
      })
    },
  )
})
