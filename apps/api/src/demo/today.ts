import type { CallKind } from '@bellpull/domain'
import type { Books, DemoCall, DemoCase, DemoItem } from './books.js'
import { addCase, signOut, startCase, timeOut, type CaseDraft } from './cases.js'
import { product } from './catalogue.js'
import { WHO, type DemoPerson } from './people.js'
import type { Steps } from './steps.js'
import type { StoryTime } from './story-time.js'

type Moment = readonly [clock: string, by: DemoPerson]

/** The way of a call's items; what is left out has not happened by now. Clock times of the story. */
export interface Way {
  readonly readBack?: Moment
  readonly accept?: Moment
  readonly pull?: Moment
  readonly deliver?: Moment
  readonly confirm?: readonly [...Moment, neededInMinutes: number]
  readonly verify?: readonly [...Moment, checker?: DemoPerson, method?: 'spoken' | 'pin']
  readonly open?: Moment
  readonly done?: Moment
}

interface TodayCall {
  readonly kind: CallKind
  readonly inMinutes: number | null
  /** REFs, or `{ text }` for what has none. */
  readonly wanted: readonly (string | { readonly text: string })[]
  /** Left out: the surgeon calls, the scrub person enters it. */
  readonly calledBy?: DemoPerson
  readonly enteredBy?: DemoPerson
  readonly data?: Record<string, unknown>
}

/** Tells the day of the story: everything is planned by the story's clock and happens in order of time. */
export class Today {
  constructor(
    readonly books: Books,
    readonly steps: Steps,
    readonly time: StoryTime,
  ) {}

  case(draft: Omit<CaseDraft, 'startsAt'> & { readonly starts: string }): DemoCase {
    const { starts, ...rest } = draft
    return addCase(this.books, { ...rest, startsAt: this.time.at(starts) })
  }

  start(of: DemoCase, started: string, timeOutFrom: string, timeOutTo: string): void {
    this.at(started, (at) => startCase(this.books, of, at))
    this.at(timeOutFrom, (at) => timeOut(this.books, of, at, false))
    this.at(timeOutTo, (at) => timeOut(this.books, of, at, true))
  }

  signOut(of: DemoCase, clock: string, patientOut: string | null): void {
    this.at(clock, (at) => signOut(this.books, of, at, patientOut === null ? null : this.time.at(patientOut)))
  }

  /** @param way of all its items; for some of them alone use {@link go}. */
  call(of: DemoCase, clock: string, call: TodayCall, way: Way = {}): DemoCall {
    const draft = this.steps.draft(
      {
        of,
        kind: call.kind,
        calledBy: call.calledBy ?? of.surgeon,
        enteredBy: call.enteredBy ?? of.scrub,
        wanted: call.wanted.map((one) => (typeof one === 'string' ? { product: product(one) } : one)),
      },
      `${of.number}:${clock}`,
    )
    this.at(clock, (at) => this.steps.call(draft, at, call.inMinutes, call.data))
    this.go(draft, [...draft.items], way)
    return draft
  }

  go(call: DemoCall, items: readonly DemoItem[], way: Way): void {
    const { steps } = this
    const { readBack, accept, pull, deliver, confirm, verify, open, done } = way
    if (readBack) this.at(readBack[0], (at) => steps.readBack(call, at, readBack[1]))
    if (accept) this.at(accept[0], (at) => steps.accept(items, at, accept[1]))
    if (pull) this.at(pull[0], (at) => steps.pull(items, at, pull[1]))
    if (deliver) this.at(deliver[0], (at) => steps.deliver(items, at, deliver[1]))
    if (confirm) this.at(confirm[0], (at) => steps.confirm(call, at, confirm[1], confirm[2]))
    if (verify) {
      const [clock, by, checker = call.of.scrub, method = 'spoken'] = verify
      this.at(clock, (at) => steps.verify(items, at, by, { checker, method }))
    }
    if (open) this.at(open[0], (at) => steps.open(items, at, open[1]))
    if (done) this.at(done[0], (at) => steps.done(items, at, done[1]))
  }

  /** Trays at the beginning of a case, called by the scrub person. */
  trays(of: DemoCase, refs: readonly string[], from: string, opened: string, done?: string): void {
    const [hours = 0, minutes = 0] = from.split(':').map(Number)
    const later = (by: number): string => {
      const sum = hours * 60 + minutes + by
      return `${String(Math.floor(sum / 60)).padStart(2, '0')}:${String(sum % 60).padStart(2, '0')}`
    }
    const { scrub, circulator } = of
    this.call(
      of,
      from,
      { kind: 'early', inMinutes: 15, wanted: refs, calledBy: scrub, enteredBy: scrub },
      {
        readBack: [later(1), circulator],
        accept: [later(2), WHO.lindy],
        pull: [later(4), WHO.lindy],
        deliver: [later(7), circulator],
        verify: [later(8), circulator],
        open: [opened, circulator],
        ...(done !== undefined && { done: [done, circulator] as const }),
      },
    )
  }

  at(clock: string, run: (at: Date) => void): void {
    this.books.plan(this.time.at(clock), run)
  }
}
