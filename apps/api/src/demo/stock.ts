import { chooseUnits, type CaseSide, type Owner, type UnitState } from '@bellpull/domain'
import type { Books, DemoItem, DemoUnit } from './books.js'
import type { Product } from './catalogue.js'
import { demoId } from './ids.js'
import { WHO, type DemoPerson } from './people.js'
import { placeOf, type Place } from './places.js'

/** A package as it comes in. */
export interface Receipt {
  readonly at: Date
  readonly lot: string
  readonly useByOn: string
  readonly serial?: string
  readonly owner?: Owner
  /** Where it is laid; left out: in its own bin. */
  readonly placeCode?: string
  /** Where it belongs; left out: in the product's bin. */
  readonly homeCode?: string
  readonly carriedBy?: DemoUnit
}

const RECEIVED_BY = WHO.soren

/** The packages of the house, and where they went. */
export class Stock {
  readonly units: DemoUnit[] = []
  readonly #free = new Map<Product, Set<DemoUnit>>()
  #serial = 1000

  constructor(private readonly books: Books) {}

  receive(product: Product, receipt: Receipt): DemoUnit {
    this.#serial += 1
    const serial = receipt.serial ?? (product.byLot ? null : String(this.#serial).padStart(6, '0'))
    const home = placeOf(receipt.homeCode ?? product.bin)
    const unit: DemoUnit = {
      id: demoId('unit', `${product.ref}:${receipt.lot}:${this.#serial}`),
      product,
      lot: receipt.lot,
      serial,
      useByOn: receipt.useByOn,
      home,
      receivedAt: receipt.at,
      owner: receipt.owner ?? 'owned',
      state: 'available',
      place: receipt.placeCode === undefined ? home : placeOf(receipt.placeCode),
      heldFor: null,
      carriedBy: receipt.carriedBy ?? null,
      sterile: true,
      note: null,
    }
    this.units.push(unit)
    this.#freeOf(product).add(unit)
    this.books.movements.push({
      unit,
      item: null,
      at: receipt.at,
      actor: RECEIVED_BY,
      why: 'received',
      from: null,
      to: unit.place,
      toState: 'available',
    })
    return unit
  }

  /** What happens to a package; where it went is kept when its place changed. */
  set(
    unit: DemoUnit,
    to: { readonly state: UnitState; readonly heldFor: DemoItem | null; readonly place?: Place },
    why: {
      readonly at: Date
      readonly actor: DemoPerson
      readonly why: string
      readonly item: DemoItem | null
    },
  ): void {
    const from = unit.place
    unit.state = to.state
    unit.heldFor = to.heldFor
    unit.place = to.place ?? from
    const free = this.#freeOf(unit.product)
    if (to.state === 'available') free.add(unit)
    else free.delete(unit)
    if (unit.place !== from)
      this.books.movements.push({ ...why, unit, from, to: unit.place, toState: to.state })
  }

  /** Packages of a product that are held for nobody and could go to this room today, best first. */
  free(
    product: Product,
    where: { room: number; side: CaseSide; today: string; soonUntil: string; now: boolean },
  ): DemoUnit[] {
    if (product.side !== undefined && product.side !== 'either' && product.side !== where.side) return []
    const usable = [...this.#freeOf(product)].filter(
      ({ sterile, useByOn, place }) =>
        sterile && useByOn >= where.today && (place.room === null || place.room === where.room),
    )
    const candidates = usable.map((unit) => ({
      unit,
      id: unit.id,
      useByOn: unit.useByOn,
      inRoom: unit.place.room !== null,
      walkOrder: unit.place.walkOrder,
      owner: unit.owner,
    }))
    const options = { now: where.now, soonUntil: where.soonUntil }
    return chooseUnits(candidates, candidates.length, options).map(({ unit }) => unit)
  }

  countFree(product: Product): number {
    return this.#freeOf(product).size
  }

  #freeOf(product: Product): Set<DemoUnit> {
    const known = this.#free.get(product)
    if (known) return known
    const fresh = new Set<DemoUnit>()
    this.#free.set(product, fresh)
    return fresh
  }
}
