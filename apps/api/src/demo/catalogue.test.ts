import { hasGs1CheckDigit } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { PRODUCTS, product } from './catalogue.js'
import { placeOf } from './places.js'

describe('the demo catalogue', () => {
  // The sample labels of the demo, as its description prints them.
  test.each([
    ['SLB-HD-44C', '09521100100441'],
    ['SLB-HD-48C', '09521100100489'],
    ['SLB-ST-05', '09521100200059'],
    ['SLB-GL-M-P', '09521100300025'],
    ['CBN-SH-52', '09521200100525'],
    ['DNK-FM-05-CR-L', '09521300110059'],
    ['DNK-FM-05-CR-R', '09521300120058'],
  ])('%s has GTIN %s', (ref, gtin) => {
    expect(product(ref).gtin).toBe(gtin)
  })

  test('every GTIN bears the prefix for examples and a right check digit, and no two are alike', () => {
    expect(PRODUCTS.filter(({ gtin }) => !/^0952\d{10}$/.test(gtin) || !hasGs1CheckDigit(gtin))).toEqual([])
    expect(new Set(PRODUCTS.map(({ gtin }) => gtin)).size).toBe(PRODUCTS.length)
    expect(new Set(PRODUCTS.map(({ ref }) => ref)).size).toBe(PRODUCTS.length)
  })

  // Height 0.75 R, to one decimal, as the demo's description lists it.
  test.each([
    [38, 14.7],
    [40, 15.5],
    [42, 16.3],
    [44, 17.0],
    [46, 17.8],
    [48, 18.6],
    [50, 19.4],
    [52, 20.1],
    [54, 20.9],
    [56, 21.7],
  ])('head %s is %s mm high, concentric and eccentric', (size, heightMm) => {
    for (const letter of ['C', 'E'])
      expect(product(`SLB-HD-${size}${letter}`)).toMatchObject({ diameterMm: size, heightMm })
  })

  test.each([
    ['Sallowby', 'head', 20],
    ['Sallowby', 'stem', 12],
    ['Sallowby', 'glenoid', 8],
    ['Sallowby', 'other', 2 + 4 + 12 + 3],
    ['Withyholt', 'stem', 30],
    ['Withyholt', 'head', 30],
    ['Cobnut', 'shell', 13],
    ['Cobnut', 'liner', 22],
    ['Dunnock', 'femur', 60],
    ['Dunnock', 'tibia', 9],
    ['Dunnock', 'insert', 48],
    ['Dunnock', 'patella', 6],
  ])('%s has its %ss: %s', (system, kind, count) => {
    expect(PRODUCTS.filter((one) => one.system === system && one.kind === kind)).toHaveLength(count)
  })

  test('a femur fits one side, everything else either; left and right lie in bins of their own', () => {
    const sided = PRODUCTS.filter(({ side }) => side !== undefined)
    expect(new Set(sided.map(({ kind }) => kind))).toEqual(new Set(['femur']))
    for (const { side, bin } of sided) expect(bin).toMatch(side === 'left' ? /^C-L/ : /^D-R/)
  })

  test('every product has a place of the house', () => {
    for (const { bin } of PRODUCTS) expect(placeOf(bin).code).toBe(bin)
  })

  test('where the parts of a pair are told apart by group or type, both have it', () => {
    const groups = (kind: string) =>
      new Set(PRODUCTS.filter((one) => one.kind === kind).map(({ group }) => group))
    expect(groups('liner')).toEqual(groups('shell'))
    expect(groups('insert')).toEqual(groups('tibia'))
    const types = (kind: string) =>
      new Set(PRODUCTS.filter((one) => one.kind === kind).map(({ type }) => type))
    expect(types('insert')).toEqual(types('femur'))
  })
})
