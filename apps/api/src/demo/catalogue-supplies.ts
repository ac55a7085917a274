import type { PartKind } from '@bellpull/domain'
import { type Listed, type SystemName } from './listed.js'
import type { Maker } from './gtin.js'

/** Labeller code of the supplies that are labelled by HIBC; invented. */
const LIC = 'Z952'

type Supply = readonly [ref: string, label: string, variant: string | null, par: number, bin: string]

const CEMENT: readonly Supply[] = [
  ['HBW-BC-40', 'Bone cement 40 g', 'standard', 30, 'D1-1'],
  ['HBW-BC-40H', 'Bone cement 40 g', 'high viscosity', 20, 'D1-2'],
]
const SINGLE_USE: readonly Supply[] = [
  ['HBW-MX-1', 'Cement mixing set', null, 20, 'D1-3'],
  ['HBW-DB-25', 'Drill bit 2.5', null, 18, 'D2-1'],
  ['HBW-DB-32', 'Drill bit 3.2', null, 24, 'D2-2'],
  ['HBW-DB-45', 'Drill bit 4.5', null, 18, 'D2-3'],
  ['HBW-DB-60', 'Drill bit 6.0', null, 12, 'D2-4'],
  ['HBW-SU-0', 'Suture 0', 'braided', 40, 'D3-1'],
  ['HBW-SU-1', 'Suture 1', 'braided', 40, 'D3-2'],
  ['HBW-SU-20', 'Suture 2-0', 'absorbable', 40, 'D3-3'],
  ['HBW-SU-30', 'Suture 3-0', 'absorbable', 30, 'D3-4'],
  ['HBW-SU-5', 'Suture 5', 'high strength', 24, 'D3-5'],
  ['HBW-SB-90', 'Saw blade 90', null, 20, 'D4-1'],
  ['HBW-SB-75', 'Saw blade 75 narrow', null, 14, 'D4-2'],
  ['HBW-PL-1', 'Pulse lavage set', null, 16, 'D4-3'],
  ['HBW-GP-2', 'Guide pins, two', null, 16, 'D4-4'],
]
/** Kept on a shelf without a count of packages: they are called, but nothing is held. */
const BY_THE_SHELF: readonly Supply[] = [
  ['HBW-LH-1', 'Light handle cover', null, 0, 'D4-5'],
  ['HBW-ST-1', 'Suction tip', null, 0, 'D4-5'],
]

const supply =
  (kind: PartKind, family: number, stocked: boolean) =>
  ([ref, label, variant, par, bin]: Supply, index: number): Listed => ({
    ref,
    system: null,
    maker: 'hobbinwick',
    number: [family, 0, index + 1],
    category: 'sterile',
    kind,
    partName: label.replace(/ [0-9].*$/, ''),
    label,
    size: /[0-9][0-9.-]*/.exec(label)?.[0] ?? null,
    order: index,
    ...(variant && { variant }),
    bin,
    par,
    have: par,
    byLot: true,
    stocked,
    ...(stocked && { hibc: { lic: LIC, product: ref.replaceAll('-', '') } }),
  })

export const supplies = (): Listed[] => [
  ...CEMENT.map(supply('cement', 1, true)),
  ...SINGLE_USE.map(supply('other', 2, true)),
  ...BY_THE_SHELF.map(supply('other', 3, false)),
]

const TRAYS: readonly (readonly [
  ref: string,
  label: string,
  system: SystemName,
  maker: Maker,
  have: number,
  bin: string,
])[] = [
  ['SLB-T1', 'Humeral tray', 'Sallowby', 'bracklethwaite', 4, 'D5-1'],
  ['SLB-T2', 'Glenoid tray', 'Sallowby', 'bracklethwaite', 4, 'D5-2'],
  ['SLB-T3', 'Reverse conversion tray', 'Sallowby', 'bracklethwaite', 0, 'LR-1'],
  ['WTH-T1', 'Broach tray', 'Withyholt', 'gannetholme', 4, 'D5-3'],
  ['CBN-T1', 'Reamer tray', 'Cobnut', 'gannetholme', 4, 'D5-4'],
  ['DNK-T1', 'Femoral tray', 'Dunnock', 'tansyhill', 4, 'D5-5'],
  ['DNK-T2', 'Tibial tray instruments', 'Dunnock', 'tansyhill', 3, 'D5-6'],
  // On loan for a revision, and not yet received.
  ['EXP-1', 'Extraction tray', 'Withyholt', 'hobbinwick', 0, 'LR-2'],
]

export const trays = (): Listed[] =>
  TRAYS.map(([ref, label, system, maker, have, bin], index) => ({
    ref,
    system,
    maker,
    number: [900, 0, index + 1],
    category: 'tray',
    kind: 'other',
    partName: 'Tray',
    label,
    size: null,
    order: 1000 + index,
    // Never shown as an alternative to a part: trays are a type of their own.
    type: ref,
    bin,
    par: have,
    have,
  }))
