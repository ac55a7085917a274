import { DateTime } from 'luxon'
import { PRODUCTS, product, type Product } from './catalogue.js'
import { WHO } from './people.js'
import { placeOf } from './places.js'
import type { Chance } from './random.js'
import type { Receipt, Stock } from './stock.js'
import type { StoryTime } from './story-time.js'

const DAY_MS = 86_400_000
const MONTHS = 'ABCDEFGHIJKL'

export const addDays = (day: string, days: number): string =>
  DateTime.fromISO(day, { zone: 'UTC' }).plus({ days }).toFormat('yyyy-MM-dd')

/** A lot as the makers of the demo print it: L, year, month as a letter, three digits: `L26A014`. */
export function lotMadeOn(day: string, chance: Chance): string {
  const [year = '', month = ''] = day.split('-')
  return `L${year.slice(2)}${MONTHS[Number(month) - 1]}${chance.whole(100, 999)}`
}

/** When this product was last said to be out of stock: what lies on the shelf now came in after that. */
export type LastNoneFree = ReadonlyMap<Product, Date>

/**
 * Fills the shelves for the morning of the story. What came back in the last ninety days and was not used
 * since counts; what is too much of it has gone back to its supplier.
 */
export function fillShelves(stock: Stock, time: StoryTime, chance: Chance, lastNoneFree: LastNoneFree): void {
  writeOffRejected(stock, time)
  for (const one of PRODUCTS) {
    if (one.stocked === false) continue
    for (let missing = one.have - stock.countFree(one); missing > 0;) {
      const together = Math.min(missing, one.byLot ? chance.whole(6, 12) : chance.whole(1, 2))
      const receipt = usualReceipt(one, time, chance, lastNoneFree.get(one))
      for (let n = 0; n < together; n += 1) stock.receive(one, receipt)
      missing -= together
    }
    sendBackTooMuch(stock, one, time)
  }
  addTraps(stock, time)
  addLoanerSet(stock, time)
  stageCarts(stock, time)
}

/** What was rejected and set aside in the past has been looked at since, and written off. */
function writeOffRejected(stock: Stock, time: StoryTime): void {
  const why = { at: time.on(-1, '17:40'), actor: WHO.soren, why: 'written off', item: null }
  for (const unit of stock.units)
    if (unit.state === 'quarantined') stock.set(unit, { state: 'writtenOff', heldFor: null }, why)
}

function usualReceipt(one: Product, time: StoryTime, chance: Chance, notBefore: Date | undefined): Receipt {
  const daysAgo = chance.whole(3, 240)
  const at = new Date(
    Math.max(time.now.getTime() - daysAgo * DAY_MS, (notBefore?.getTime() ?? 0) + DAY_MS / 8),
  )
  const expiresSoon = one.category === 'implant' && !KEPT_FROM_CHANCE.has(one.ref) && chance.hits(0.04)
  const useByOn = time.day(expiresSoon ? chance.whole(4, 29) : chance.whole(60, 1500))
  const madeOn = [addDays(useByOn, -5 * 365), addDays(at.toISOString().slice(0, 10), -chance.whole(20, 90))]
  return {
    at,
    lot: lotMadeOn(madeOn.sort()[0] ?? useByOn, chance),
    useByOn,
    owner: one.category === 'implant' && chance.hits(0.12) ? 'consigned' : 'owned',
  }
}

/** Products whose order of expiry the story needs as it is. */
const KEPT_FROM_CHANCE = new Set(['DNK-IN-G2-10-CR', 'WTH-ST-07-H', 'SLB-HD-48E'])

function sendBackTooMuch(stock: Stock, one: Product, time: StoryTime): void {
  const free = stock.units.filter((unit) => unit.product === one && unit.state === 'available')
  for (const unit of free.slice(one.have))
    stock.set(
      unit,
      { state: 'shippedBack', heldFor: null, place: placeOf('RT') },
      { at: time.on(-1, '17:45'), actor: WHO.soren, why: 'shipped back: over par', item: null },
    )
}

/** Packages with a story of their own. */
function addTraps(stock: Stock, time: StoryTime): void {
  const weeksAgo = time.on(-40, '10:00')

  // The label that the guide to scanning prints; its date while that is still to come.
  const printed = '2028-11-30'
  stock.receive(product('SLB-HD-48C'), {
    at: weeksAgo,
    lot: 'L26A014',
    serial: '000731',
    useByOn: printed > time.day(60) ? printed : time.day(700),
  })

  // Usable today, and not tomorrow.
  stock.receive(product('WTH-ST-07-H'), { at: weeksAgo, lot: 'L21M207', useByOn: time.today })

  // The lot that is going to be recalled: first of its kind to expire, so that the story's calls get it.
  for (let n = 0; n < 3; n += 1)
    stock.receive(product('DNK-IN-G2-10-CR'), { at: weeksAgo, lot: 'L26A020', useByOn: time.day(40) })

  const setAside = (ref: string, clock: string, note: string, change: { sterile: boolean }): void => {
    const unit = stock.receive(product(ref), { at: weeksAgo, lot: 'L25K118', useByOn: time.day(400) })
    Object.assign(unit, { note, ...change })
    stock.set(
      unit,
      { state: 'quarantined', heldFor: null, place: placeOf('Q') },
      { at: time.at(clock), actor: WHO.lindy, why: `quarantined: ${note}`, item: null },
    )
  }
  setAside('DNK-T2', '07:05', 'wet pack', { sterile: false })
  setAside('CBN-SH-54', '09:05', 'torn wrap', { sterile: true })

  const expired = stock.receive(product('SLB-GL-XL-K'), {
    at: time.on(-200, '10:00'),
    lot: 'L21K552',
    useByOn: time.day(-6),
  })
  stock.set(
    expired,
    { state: 'expired', heldFor: null, place: placeOf('Q') },
    { at: time.on(-5, '06:30'), actor: WHO.lindy, why: 'past its use-by date', item: null },
  )
}

/** A set on loan stands in the rack as one tray that carries its packages. */
function addLoanerSet(stock: Stock, time: StoryTime): void {
  const at = time.on(-3, '14:20')
  const receipt = { at, lot: 'L26C311', owner: 'loaner', placeCode: 'LR-1', homeCode: 'LR-1' } as const
  const tray = stock.receive(product('SLB-T3'), { ...receipt, useByOn: time.day(27) })
  for (const ref of ['SLB-BP-25', 'SLB-BP-28', 'SLB-GS-38', 'SLB-GS-40', 'SLB-CI-38-3', 'SLB-CI-40-3'])
    stock.receive(product(ref), { ...receipt, useByOn: time.day(600), carriedBy: tray })
}

/** What the core has put on the rooms' carts before the first case. */
const STAGED: readonly (readonly [room: number, refs: readonly string[]])[] = [
  [1, ['DNK-PT-35', 'HBW-BC-40']],
  [2, ['SLB-HD-46C', 'SLB-HD-48C']],
  [3, ['WTH-HD-36-P0', 'HBW-GP-2']],
  [4, ['DNK-PT-32', 'HBW-BC-40']],
  [5, ['WTH-HD-36-P4', 'HBW-BC-40H']],
  [6, ['SLB-HD-46C', 'SLB-HD-50C']],
  [7, ['WTH-HD-32-P0', 'HBW-GP-2']],
  [8, ['DNK-PT-29', 'HBW-BC-40']],
]
const ON_EVERY_CART = ['HBW-SU-1', 'HBW-SU-1', 'HBW-SU-20', 'HBW-SU-20', 'HBW-DB-32']

function stageCarts(stock: Stock, time: StoryTime): void {
  for (const [room, refs] of STAGED) {
    for (const ref of [...refs, ...ON_EVERY_CART]) {
      const where = { room, side: 'left', today: time.today, soonUntil: time.today, now: false } as const
      // The last to expire goes out to a room; the first stays where everybody's calls find it.
      const unit = stock.free(product(ref), where).findLast(({ place }) => place.zone === 'core')
      if (!unit) throw new RangeError(`nothing to stage of ${ref}`)
      stock.set(
        unit,
        { state: 'available', heldFor: null, place: placeOf(`R${room}`) },
        { at: time.at('06:40'), actor: WHO.casimir, why: 'staged', item: null },
      )
    }
  }
}
