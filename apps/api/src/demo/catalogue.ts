import { hipProducts } from './catalogue-hip.js'
import { kneeProducts } from './catalogue-knee.js'
import { shoulderProducts } from './catalogue-shoulder.js'
import { supplies, trays } from './catalogue-supplies.js'
import { MAKER, gtinOf, type Maker } from './gtin.js'
import { demoId } from './ids.js'
import { SYSTEMS, type Listed, type SystemName } from './listed.js'

export const SUPPLIERS: Readonly<Record<Maker, { name: string; email: string }>> = {
  bracklethwaite: { name: 'Bracklethwaite Joint Works', email: 'orders@bracklethwaite.example' },
  gannetholme: { name: 'Gannetholme Implants', email: 'orders@gannetholme.example' },
  tansyhill: { name: 'Tansyhill Devices', email: 'orders@tansyhill.example' },
  hobbinwick: { name: 'Hobbinwick Medical Supply', email: 'loaners@hobbinwick.example' },
}

export interface Product extends Listed {
  readonly id: string
  readonly gtin: string
}

/** Everything that can be called by a number, in a fixed order. */
export const PRODUCTS: readonly Product[] = [
  ...shoulderProducts(),
  ...hipProducts(),
  ...kneeProducts(),
  ...supplies(),
  ...trays(),
].map((listed) => ({
  ...listed,
  id: demoId('catalogue', listed.ref),
  gtin: gtinOf(listed.maker, ...listed.number),
}))

const BY_REF = new Map(PRODUCTS.map((product) => [product.ref, product]))

/** @throws {RangeError} for a REF that the catalogue does not have: a slip in the story. */
export function product(ref: string): Product {
  const found = BY_REF.get(ref)
  if (!found) throw new RangeError(`the demo catalogue has no ${ref}`)
  return found
}

export const supplierId = (maker: Maker): string => demoId('supplier', maker)
export const systemId = (system: SystemName): string => demoId('system', system)

export const supplierRows = (): Record<string, unknown>[] =>
  (Object.keys(MAKER) as Maker[]).map((maker) => ({ id: supplierId(maker), ...SUPPLIERS[maker] }))

export const systemRows = (): Record<string, unknown>[] =>
  (Object.keys(SYSTEMS) as SystemName[]).map((name) => ({
    id: systemId(name),
    name,
    maker: SUPPLIERS[SYSTEMS[name]].name,
    supplier_id: supplierId(SYSTEMS[name]),
  }))

export const catalogueRows = (): Record<string, unknown>[] =>
  PRODUCTS.map((one) => ({
    id: one.id,
    ref: one.ref,
    gtin: one.gtin,
    hibc_lic: one.hibc?.lic ?? null,
    hibc_product: one.hibc?.product ?? null,
    system_id: one.system && systemId(one.system),
    supplier_id: supplierId(one.maker),
    category: one.category,
    kind: one.kind,
    part_name: one.partName,
    label: one.label,
    size: one.size,
    size_order: one.order,
    variant: one.variant ?? null,
    diameter_mm: one.diameterMm ?? null,
    height_mm: one.heightMm ?? null,
    side: one.side ?? 'either',
    taper: one.taper ?? null,
    group_code: one.group ?? null,
    type_code: one.type ?? null,
    par: one.par,
    stocked: one.stocked ?? true,
    active: true,
  }))
