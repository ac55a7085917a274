import { DateTime } from 'luxon'
import type { Stage } from '@bellpull/domain'
import type { DemoCall, DemoItem } from './books.js'
import { PRODUCTS, type Product } from './catalogue.js'
import { WHO, type DemoPerson } from './people.js'
import type { PastCall } from './past-cases.js'
import type { Chance } from './random.js'
import type { Steps } from './steps.js'
import { minutesAfter } from './story-time.js'

const SECOND_MS = 1000

/** What goes otherwise than usual, as shares of all implants called. Invented, of the size that the trade reports. */
const SHARE = {
  changed: 0.04,
  notImplanted: 0.025,
  cancelled: 0.02,
  returned: 0.04,
  rejected: 0.007,
  refused: 0.01,
  handedOver: 0.03,
  takenOver: 0.02,
  enteredTogether: 0.035,
  typed: 0.04,
}

export interface CourseOptions {
  readonly steps: Steps
  readonly chance: Chance
  /** Makes sure that a package of it can be held at that moment. */
  readonly provide: (product: Product, at: Date) => void
  /** Called when a step is planned, so that the case stays open until it is over. */
  readonly until: (at: Date) => void
}

/** The course of one past call, step by step; each step plans the next when it happens. */
export class Course {
  readonly #slow: number

  constructor(
    private readonly options: CourseOptions,
    private readonly call: DemoCall,
    private readonly past: PastCall,
    private readonly startsAt: Date,
  ) {
    const { hour } = DateTime.fromJSDate(startsAt, { zone: options.steps.days.zone })
    const crowded = hour === 7 || (hour >= 11 && hour < 13) ? 1.35 : 1
    const far = 1 + (call.of.room - 1) * 0.035
    const family = call.items.some(({ product }) => product?.kind === 'insert') ? 1.15 : 1
    this.#slow = crowded * far * family
  }

  /** After the call was made: read back, then fetched. */
  begin(calledAt: Date): void {
    const { call } = this
    const { steps, chance } = this.options
    const circulator = call.of.circulator
    let settledAt = calledAt
    for (const item of call.items) {
      if (item.hold !== 'noneFree') continue
      settledAt = this.#after(calledAt, 22, 0.3)
      this.#choose(item, settledAt)
    }
    const readBackAt = this.#after(settledAt, 38, 0.4, 12)
    this.#plan(readBackAt, (at) => steps.readBack(call, at, circulator))

    if (call.kind === 'early' && chance.hits(SHARE.cancelled)) {
      this.#plan(minutesAfter(readBackAt, chance.whole(1, 3)), (at) => this.#cancelAll(at))
      return
    }
    const acceptAt = this.#after(readBackAt, call.kind === 'confirmed' ? 24 : 75, 0.65)
    this.#plan(acceptAt, (at) => this.#accept(at))
    const { confirmedAt } = this.past
    if (call.kind !== 'confirmed' && confirmedAt !== undefined)
      this.#plan(minutesAfter(this.startsAt, confirmedAt + chance.whole(-3, 6)), (at) => this.#confirm(at))
  }

  #choose(item: DemoItem, when: Date): void {
    this.#plan(when, (at) => {
      const { product } = item
      const near = product && nearest(product)
      if (!near) return
      this.options.provide(near, at)
      this.options.steps.change(item, at, this.call.of.scrub, near, 'none free')
    })
  }

  #cancelAll(at: Date): void {
    const by = this.call.of.scrub
    for (const item of this.#open()) this.options.steps.cancel(item, at, by, 'not needed')
  }

  #accept(at: Date): void {
    const { steps, chance } = this.options
    const items = standing(this.call.items, 'called').filter(({ hold }) => hold !== 'noneFree')
    const by = chance.pick([WHO.jory, this.call.of.circulator, WHO.casimir, WHO.lindy])
    steps.accept(items, at, by)
    if (chance.hits(SHARE.takenOver)) {
      const other = chance.pick([WHO.jory, WHO.lindy].filter((one) => one !== by))
      const [first] = items
      if (first)
        this.#plan(this.#after(at, 20, 0.3), (later) => {
          if (standing([first], 'accepted', 'pulled', 'inRoom').length === 1)
            steps.takeOver(first, later, other)
        })
    }
    // Tapped in one go after the walk: "entered together", which leaves the medians of the spans alone.
    const together = chance.hits(SHARE.enteredTogether)
    const pullAt = together ? this.#soon(at, 1.6) : this.#after(at, 108, 0.5, 35)
    this.#plan(pullAt, (later) => this.#pull(later, together))
  }

  #pull(at: Date, together: boolean): void {
    const { steps, chance } = this.options
    const open = standing(this.call.items, 'accepted')
    const inBins = open.filter((item) => item.category !== 'other')
    steps.pull(inBins, at, chance.pick([WHO.casimir, WHO.lindy]), chance.hits(SHARE.typed))
    const [first] = inBins
    if (first?.category === 'implant' && this.call.kind === 'early' && chance.hits(SHARE.changed)) {
      const next = nearest(first.product)
      if (next) {
        this.#plan(this.#after(at, 30, 0.3), (later) => this.#change(first, next, later))
        this.#deliverLater(
          open.filter((item) => item !== first),
          at,
          together,
        )
        return
      }
    }
    this.#deliverLater(open, at, together)
  }

  #deliverLater(items: readonly DemoItem[], at: Date, together: boolean): void {
    if (items.length === 0) return
    const when = together ? this.#soon(at, 1.4) : this.#after(at, 72, 0.5, 18)
    this.#plan(when, (later) => this.#deliver(items, later))
  }

  /** Another size after pulling: the first goes back to its bin, the new one is fetched. */
  #change(item: DemoItem, to: Product, at: Date): void {
    const { steps, provide } = this.options
    if (standing([item], 'pulled').length === 0) return
    provide(to, at)
    const next = steps.change(item, at, this.call.of.scrub, to, 'size changed')
    this.#shelveLater(item, at)
    this.#fetch(next, this.#after(at, 30, 0.5))
  }

  /** An item that begins anew, after another size was chosen or its package rejected. */
  #fetch(item: DemoItem, when: Date): void {
    const { steps } = this.options
    this.#plan(when, (at) => {
      steps.accept(standing([item], 'called'), at, WHO.jory)
      this.#plan(this.#after(at, 110, 0.5, 35), (pulled) => {
        steps.pull(standing([item], 'accepted'), pulled, WHO.casimir)
        this.#deliverLater([item], pulled, false)
      })
    })
  }

  #deliver(brought: readonly DemoItem[], at: Date): void {
    const { steps, chance } = this.options
    const items = standing(brought, 'accepted', 'pulled')
    if (items.length === 0) return
    const { circulator } = this.call.of
    steps.deliver(items, at, chance.hits(0.6) ? WHO.jory : circulator)
    const inWords = items.filter((item) => item.category === 'other')
    if (inWords.length > 0)
      this.#plan(minutesAfter(at, chance.whole(5, 20)), (later) => steps.done(inWords, later, circulator))
    const rest = items.filter((item) => item.category !== 'other')
    if (chance.hits(SHARE.handedOver)) this.#handOver(rest, at)
    if (this.call.kind === 'confirmed') this.#verifyLater(rest, at)
    // Otherwise it lies ready until the call is confirmed.
  }

  #handOver(items: readonly DemoItem[], at: Date): void {
    const { steps, chance } = this.options
    const [first] = items
    const from = first?.acceptedBy
    if (!from) return
    const to = chance.pick([WHO.wren, WHO.tobiah, WHO.ifeoma].filter((one) => one !== from))
    this.#plan(this.#soon(at, 6), (later) => {
      const mine = standing(items, 'inRoom')
      steps.handOver(mine, later, from, to)
      this.#plan(this.#soon(later, 8), (taken) => steps.take(standing(mine, 'inRoom', 'verified'), taken, to))
    })
  }

  #confirm(at: Date): void {
    const { steps, chance } = this.options
    const { call } = this
    const open = this.#open()
    if (open.length === 0) return
    if (call.readBackBy === null) return this.#plan(minutesAfter(at, 1), (later) => this.#confirm(later))
    const standby = call.kind === 'standby'
    steps.confirm(call, at, call.of.scrub, standby ? 5 : chance.pick([0, 5, 5]))
    // Of what stood by only the last is wanted; the rest goes back.
    if (standby) for (const item of open.slice(0, -1)) this.#giveBack(item, at)
    this.#verifyLater(standing(call.items, 'inRoom'), at)
  }

  #giveBack(item: DemoItem, at: Date): void {
    const { steps } = this.options
    if (item.stage === 'inRoom' || item.stage === 'pulled') {
      this.#plan(this.#soon(at, 15), (later) => {
        if (standing([item], 'pulled', 'inRoom').length === 0) return
        steps.putBack([item], later, this.call.of.circulator, 'other size chosen')
        this.#shelveLater(item, later)
      })
    } else steps.cancel(item, at, this.call.of.scrub, 'other size chosen')
  }

  #verifyLater(items: readonly DemoItem[], at: Date): void {
    const { steps, chance } = this.options
    const { circulator, scrub } = this.call.of
    if (items.length === 0) return
    const [first] = items
    if (first?.category === 'implant' && chance.hits(SHARE.refused)) {
      this.#plan(this.#soon(at, 20), (later) => {
        const problem = chance.pick(['not-as-heard', 'wrong-item', 'not-intact'])
        if (standing([first], 'inRoom').length === 1) steps.refuse(first, later, circulator, { problem })
      })
    } else if (first?.category === 'implant' && chance.hits(SHARE.rejected)) {
      this.#plan(this.#soon(at, 25), (later) => this.#reject(first, later))
      items = items.slice(1)
    }
    this.#plan(this.#after(at, 46, 0.45, 26), (later) => {
      const ready = standing(items, 'inRoom')
      if (ready.length === 0) return
      if (this.call.readBackBy === null) return this.#verifyLater(ready, later)
      steps.verify(ready, later, circulator, { checker: scrub, method: chance.hits(0.75) ? 'spoken' : 'pin' })
      this.#useLater(ready, later)
    })
  }

  #reject(item: DemoItem, at: Date): void {
    const { steps, provide, chance } = this.options
    if (standing([item], 'inRoom').length === 0) return
    if (item.product) provide(item.product, at)
    steps.reject(item, at, this.call.of.circulator, chance.pick(['torn', 'wet', 'dropped', 'dusty', 'label']))
    this.#fetch(item, this.#after(at, 20, 0.4))
  }

  #useLater(items: readonly DemoItem[], at: Date): void {
    const { steps, chance } = this.options
    const { circulator } = this.call.of
    const back = items.filter(() => chance.hits(SHARE.returned))
    const used = items.filter((item) => !back.includes(item))
    for (const item of back)
      this.#plan(minutesAfter(at, chance.whole(3, 12)), (later) => {
        steps.putBack([item], later, circulator, 'not needed')
        this.#shelveLater(item, later)
      })
    if (used.length === 0) return
    this.#plan(minutesAfter(at, 1 + chance.next() * 6), (opened) => {
      steps.open(used, opened, circulator)
      const spoiled = used.filter((item) => item.category === 'implant' && chance.hits(SHARE.notImplanted))
      for (const item of spoiled)
        this.#plan(minutesAfter(opened, 2), (later) => {
          const reasons = ['sizeChanged', 'sizeChanged', 'contaminated', 'damaged', 'defect', 'other']
          steps.notImplanted(item, later, circulator, chance.pick(reasons))
        })
      const good = used.filter((item) => !spoiled.includes(item))
      this.#plan(minutesAfter(opened, 4 + chance.next() * 9), (later) => steps.done(good, later, circulator))
    })
  }

  #shelveLater(item: DemoItem, at: Date): void {
    const by: DemoPerson = this.options.chance.pick([WHO.casimir, WHO.lindy, WHO.jory])
    this.#plan(this.#after(at, 900, 0.6), (later) => {
      if (item.putBackTo) this.options.steps.shelve(item, later, by)
    })
  }

  #open(): DemoItem[] {
    return this.call.items.filter((item) => item.outcome === null)
  }

  #after(at: Date, medianSeconds: number, spread: number, atLeast = 4): Date {
    const seconds = Math.max(atLeast, this.options.chance.logNormal(medianSeconds, spread) * this.#slow)
    return new Date(at.getTime() + Math.round(seconds * SECOND_MS))
  }

  #soon(at: Date, seconds: number): Date {
    return new Date(at.getTime() + Math.round(seconds * SECOND_MS * (0.7 + 0.6 * this.options.chance.next())))
  }

  #plan(at: Date, run: (at: Date) => void): void {
    this.options.until(at)
    this.options.steps.books.plan(at, run)
  }
}

/** Those of these items that still stand at one of these stages: something else may have come between. */
const standing = (items: readonly DemoItem[], ...stages: Stage[]): DemoItem[] =>
  items.filter((item) => item.outcome === null && stages.includes(item.stage))

/** The next size of the same kind and variant: up, else down; `null` where there is none. */
export function nearest(of: Product | null): Product | null {
  if (!of) return null
  const same = PRODUCTS.filter(
    (one) =>
      one.system === of.system &&
      one.kind === of.kind &&
      one.variant === of.variant &&
      one.group === of.group &&
      one.side === of.side &&
      one !== of,
  )
  const apart = (one: Product) => Math.abs(one.order - of.order)
  return same.sort((a, b) => apart(a) - apart(b) || b.order - a.order)[0] ?? null
}
