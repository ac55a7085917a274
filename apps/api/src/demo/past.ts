import { DateTime } from 'luxon'
import type { Books, DemoCase } from './books.js'
import { addCase, cancelCase, signOut, startCase, timeOut, unsettled } from './cases.js'
import { product, type Product } from './catalogue.js'
import { pastCase, type PastCall, type PastCase } from './past-cases.js'
import { Course, nearest } from './past-course.js'
import { WHO, type DemoPerson } from './people.js'
import { ROOM_NUMBERS } from './places.js'
import { Chance } from './random.js'
import { StoryFault } from './rules.js'
import { addDays, lotMadeOn } from './stock-today.js'
import type { Steps } from './steps.js'
import { minutesAfter, type StoryTime } from './story-time.js'

/** How far back the past of the demo reaches, in days. */
export const PAST_DAYS = 90

const DAY_MS = 86_400_000
/** Share of the calls for one implant that find none free. */
const NONE_FREE = 0.03

const OF_JOINT: Partial<Record<string, DemoPerson>> = { left: WHO.pim, right: WHO.lotte }

/**
 * Ninety days of work in eight rooms: every call, hold, walk and check by the rules of the house, with the
 * things that go otherwise. Packages come in as they are needed.
 */
export class Past {
  readonly #lastNoneFree = new Map<Product, Date>()
  readonly #numbers = new Map<string, number>()

  constructor(
    private readonly books: Books,
    private readonly steps: Steps,
    private readonly time: StoryTime,
  ) {}

  /** Tells it all. @returns when each product was last said to be out of stock. */
  tell(): ReadonlyMap<Product, Date> {
    for (let day = -PAST_DAYS; day < 0; day += 1) {
      if (DateTime.fromISO(this.time.day(day), { zone: 'UTC' }).weekday > 5) continue
      for (const room of ROOM_NUMBERS) {
        const chance = new Chance(`past:${day}:${room}`)
        this.#planCase(room, day, minutesAfter(this.time.on(day, '07:30'), chance.whole(-5, 65)), chance)
      }
    }
    this.books.run()
    return this.#lastNoneFree
  }

  #planCase(room: number, day: number, startsAt: Date, chance: Chance): void {
    this.books.plan(minutesAfter(startsAt, -24), (at) => {
      const told = pastCase(chance)
      const circulator = chance.pick([WHO.ifeoma, WHO.tobiah, WHO.wren])
      const of = addCase(this.books, {
        number: this.#number(day),
        room,
        startsAt: new Date(Math.round(startsAt.getTime() / 300_000) * 300_000),
        procedure: told.procedure,
        side: told.side,
        surgeon: told.surgeon,
        scrub: chance.hits(0.8) ? (OF_JOINT[told.side] ?? WHO.pim) : WHO.lotte,
        circulator,
        plan: told.plan,
      })
      if (chance.hits(0.015)) {
        cancelCase(this.books, of, at, WHO.magda, 'patient not fit today')
        this.#planNext(of, day, at, chance)
        return
      }
      startCase(this.books, of, at)
      this.#planCourse(of, told, day, startsAt, chance)
    })
  }

  /** Numbers of the past are year, day of the year and a count, so that they never meet the story's own. */
  #number(day: number): string {
    const date = DateTime.fromISO(this.time.day(day), { zone: 'UTC' })
    const key = date.toFormat('yyooo')
    const count = (this.#numbers.get(key) ?? 0) + 1
    this.#numbers.set(key, count)
    return `${key}-${count}`
  }

  #planCourse(of: DemoCase, told: PastCase, day: number, startsAt: Date, chance: Chance): void {
    this.books.plan(minutesAfter(startsAt, -6), (at) => timeOut(this.books, of, at, false))
    this.books.plan(minutesAfter(startsAt, -4), (at) => timeOut(this.books, of, at, true))
    let until = minutesAfter(startsAt, told.minutes * (0.85 + 0.4 * chance.next()))
    const extend = (at: Date) => {
      if (at > until) until = at
    }
    for (const past of told.calls) {
      const when = minutesAfter(startsAt, past.atMinute + chance.whole(-3, 5))
      this.books.plan(when, (at) => this.#makeCall(of, past, at, startsAt, chance, extend))
    }
    const latest = minutesAfter(until, 240)
    const close = (at: Date): void => {
      if (at > latest) throw new StoryFault(`${of.number} does not come to its end`)
      if (unsettled(of) || until > at) this.books.plan(minutesAfter(at, 4), close)
      else {
        signOut(this.books, of, at, minutesAfter(at, -4))
        this.#planNext(of, day, at, chance)
      }
    }
    this.books.plan(minutesAfter(until, 8), close)
  }

  #makeCall(
    of: DemoCase,
    past: PastCall,
    at: Date,
    startsAt: Date,
    chance: Chance,
    until: (at: Date) => void,
  ): void {
    const provide = (one: Product, when: Date) => this.#provide(one, when, chance)
    const call = this.steps.draft(
      {
        of,
        kind: past.kind,
        calledBy: past.byScrub ? of.scrub : of.surgeon,
        enteredBy: past.byScrub || chance.hits(0.8) ? of.scrub : of.circulator,
        wanted: [
          ...past.refs.map((ref) => ({ product: product(ref) })),
          ...(past.text === undefined ? [] : [{ text: past.text }]),
        ],
      },
      `${of.number}:${of.calls.length}:${past.atMinute}`,
    )
    const [first] = call.items
    const single = call.items.length === 1 && first?.category === 'implant' ? first.product : null
    const couldLack = single && past.kind !== 'standby' && this.steps.stock.countFree(single) === 0
    if (couldLack && nearest(single) && chance.hits(NONE_FREE)) this.#lastNoneFree.set(single, at)
    else for (const item of call.items) if (item.product) provide(item.product, at)
    this.steps.call(call, at, past.inMinutes)
    new Course({ steps: this.steps, chance, provide, until }, call, past, startsAt).begin(at)
  }

  /** One more package on the shelf, unless enough are there. It came in some weeks before. */
  #provide(one: Product, at: Date, chance: Chance): void {
    if (one.stocked === false) return
    const enough = one.byLot ? 4 : 1
    if (this.steps.stock.countFree(one) >= enough) return
    const before = new Date(at.getTime() - chance.whole(3, 45) * DAY_MS)
    const since = this.#lastNoneFree.get(one)
    const received = since && since > before ? new Date((since.getTime() + at.getTime()) / 2) : before
    const receivedOn = received.toISOString().slice(0, 10)
    const useByOn = addDays(receivedOn, chance.whole(240, 1600))
    const madeOn = [addDays(receivedOn, -chance.whole(20, 120)), addDays(useByOn, -5 * 365)].sort()[0]
    const receipt = { at: received, lot: lotMadeOn(madeOn ?? receivedOn, chance), useByOn }
    for (let n = 0; n < (one.byLot ? 10 : 1); n += 1) this.steps.stock.receive(one, receipt)
  }

  /** The next case of the room, while the day is long enough for one. */
  #planNext(of: DemoCase, day: number, at: Date, chance: Chance): void {
    const next = minutesAfter(at, 26 + chance.whole(24, 46))
    if (next < this.time.on(day, '14:50')) this.#planCase(of.room, day, next, chance)
  }
}
