import { CATEGORY_RULES, type Category } from '@bellpull/domain'
import type { DemoCall, DemoItem, DemoUnit } from './books.js'
import type { Product } from './catalogue.js'
import { demoId } from './ids.js'
import type { DemoPerson } from './people.js'
import type { Stock } from './stock.js'
import type { HouseDays } from './story-time.js'

/** What is called: a product of the catalogue, or something in words. */
export type Wanted = { readonly product: Product } | { readonly text: string }

/** What a line of the log says of a package. */
export const unitFacts = (unit: DemoUnit | null): Record<string, unknown> =>
  unit ? { unitId: unit.id, lot: unit.lot, serial: unit.serial, useByOn: unit.useByOn } : {}

/** Items and the packages that are kept for them. */
export class Holding {
  constructor(
    private readonly stock: Stock,
    private readonly days: HouseDays,
  ) {}

  add(call: DemoCall, wanted: Wanted, replaces: DemoItem | null): DemoItem {
    const product = 'product' in wanted ? wanted.product : null
    const category: Category = product?.category ?? 'other'
    const item: DemoItem = {
      id: demoId('item', `${call.id}:${call.items.length + 1}`),
      call,
      product,
      text: 'text' in wanted ? wanted.text : null,
      category,
      side: product?.side ?? 'either',
      stage: 'called',
      outcome: null,
      hold: CATEGORY_RULES[category].holdsUnit && product?.stocked !== false ? 'noneFree' : 'notStocked',
      unit: null,
      acceptedBy: null,
      acceptedAt: null,
      offeredTo: null,
      pulledAt: null,
      inRoomAt: null,
      verifiedAt: null,
      openedAt: null,
      settledAt: null,
      checkedBy: null,
      secondCheck: null,
      typed: false,
      reason: null,
      putBackTo: null,
      putBackSince: null,
      putBackInspect: false,
      putBackDoneAt: null,
      replaces,
      version: 1,
    }
    call.items.push(item)
    return item
  }

  /** Keeps the best free package for the item, where there is one. */
  hold(item: DemoItem, at: Date, now: boolean): void {
    if (item.hold === 'notStocked' || !item.product) return
    const { of } = item.call
    const { day, soonUntil } = this.days.of(at)
    const where = {
      room: of.room,
      side: of.side,
      today: day,
      soonUntil,
      now,
    }
    const [unit] = this.stock.free(item.product, where)
    item.unit = unit ?? null
    item.hold = unit ? 'held' : 'noneFree'
    if (unit)
      this.stock.set(
        unit,
        { state: 'held', heldFor: item },
        { at, actor: item.call.enteredBy, why: 'held', item },
      )
  }

  settle(
    item: DemoItem,
    at: Date,
    by: DemoPerson,
    outcome: 'implanted' | 'used' | 'notImplanted',
    reason: string | null,
  ): Record<string, unknown> {
    Object.assign(item, { outcome, settledAt: at, reason })
    if (item.unit)
      this.stock.set(item.unit, { state: outcome, heldFor: null }, { at, actor: by, why: outcome, item })
    return unitFacts(item.unit)
  }

  /** On the shelf the hold is let go; what has left its bin becomes a put-back. */
  letGo(item: DemoItem, at: Date, by: DemoPerson, why: string): void {
    if (!item.unit) return
    if (item.stage === 'called' || item.stage === 'accepted') {
      this.stock.set(item.unit, { state: 'available', heldFor: null }, { at, actor: by, why, item })
      item.unit = null
    } else this.startPutBack(item, at, by, false)
  }

  startPutBack(item: DemoItem, at: Date, by: DemoPerson, inspect: boolean): void {
    if (!item.unit) return
    Object.assign(item, { putBackTo: item.unit.home, putBackSince: at, putBackInspect: inspect })
    this.stock.set(item.unit, { state: 'putBack', heldFor: null }, { at, actor: by, why: 'put back', item })
  }
}
