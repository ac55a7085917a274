import type { EventType } from '@bellpull/contracts'
import type {
  CallKind,
  CaseSide,
  Category,
  Hold,
  Outcome,
  Owner,
  PartKind,
  Side,
  Stage,
  UnitState,
} from '@bellpull/domain'
import type { Product } from './catalogue.js'
import type { SystemName } from './listed.js'
import type { DemoPerson } from './people.js'
import type { Place } from './places.js'

/** A package, as the story moves it about. */
export interface DemoUnit {
  readonly id: string
  readonly product: Product
  readonly lot: string
  readonly serial: string | null
  readonly useByOn: string
  readonly home: Place
  readonly receivedAt: Date
  readonly owner: Owner
  state: UnitState
  place: Place
  heldFor: DemoItem | null
  carriedBy: DemoUnit | null
  sterile: boolean
  note: string | null
}

export interface DemoPlanLine {
  readonly kind: PartKind
  readonly system: SystemName
  readonly variant?: string
  readonly planned?: string
  readonly from?: string
  readonly to?: string
  readonly hint?: string
}

export interface DemoCase {
  readonly id: string
  readonly number: string
  readonly room: number
  startsAt: Date
  status: 'planned' | 'inProgress' | 'closed' | 'cancelled'
  readonly procedure: { readonly kind: string; readonly label: string }
  readonly side: CaseSide
  readonly surgeon: DemoPerson
  readonly scrub: DemoPerson
  circulator: DemoPerson
  readonly plan: readonly DemoPlanLine[]
  readonly calls: DemoCall[]
  linked: DemoCase | null
  startedAt: Date | null
  timeOutAt: Date | null
  timeOutEndedAt: Date | null
  patientOutAt: Date | null
  closedAt: Date | null
  statusReason: string | null
  version: number
}

export interface DemoCall {
  readonly id: string
  readonly of: DemoCase
  kind: CallKind
  neededAt: Date | null
  calledAt: Date
  readonly calledBy: DemoPerson
  readonly enteredBy: DemoPerson
  readBackBy: DemoPerson | null
  readBackAt: Date | null
  confirmedAt: Date | null
  revision: number
  version: number
  readonly items: DemoItem[]
}

export interface DemoItem {
  readonly id: string
  readonly call: DemoCall
  readonly product: Product | null
  readonly text: string | null
  readonly category: Category
  readonly side: Side
  stage: Stage
  outcome: Outcome | null
  hold: Hold
  unit: DemoUnit | null
  acceptedBy: DemoPerson | null
  acceptedAt: Date | null
  offeredTo: DemoPerson | null
  pulledAt: Date | null
  inRoomAt: Date | null
  verifiedAt: Date | null
  openedAt: Date | null
  settledAt: Date | null
  checkedBy: DemoPerson | null
  secondCheck: 'spoken' | 'pin' | null
  typed: boolean
  reason: string | null
  putBackTo: Place | null
  putBackSince: Date | null
  putBackInspect: boolean
  putBackDoneAt: Date | null
  replaces: DemoItem | null
  version: number
}

export interface DemoEvent {
  readonly room: number
  readonly seq: number
  readonly type: EventType
  readonly at: Date
  readonly of: DemoCase
  readonly call: DemoCall | null
  readonly item: DemoItem | null
  readonly actor: DemoPerson
  readonly data: Record<string, unknown>
}

export interface DemoMovement {
  readonly unit: DemoUnit
  readonly item: DemoItem | null
  readonly at: Date
  readonly actor: DemoPerson
  readonly why: string
  readonly from: Place | null
  readonly to: Place
  readonly toState: UnitState
}

export const putBackPending = (item: DemoItem): boolean =>
  item.putBackTo !== null && item.putBackDoneAt === null

interface Planned {
  readonly at: number
  readonly order: number
  readonly run: (at: Date) => void
}

type Happened = readonly [type: EventType, item: DemoItem | null, data?: Record<string, unknown>]

/**
 * The house's books while the story is told: what happened is planned in any order and happens in order of
 * time, so that revisions and events have no gap, as in a house that was worked in.
 */
export class Books {
  readonly cases: DemoCase[] = []
  readonly calls: DemoCall[] = []
  readonly items: DemoItem[] = []
  readonly events: DemoEvent[] = []
  readonly movements: DemoMovement[] = []
  readonly rooms = new Map<number, { revision: number; eventSeq: number; lastEventAt: number }>()
  readonly #planned: Planned[] = []
  #order = 0

  /** @param run is given `at`, and may plan more that happens later. */
  plan(at: Date, run: (at: Date) => void): void {
    const step = { at: at.getTime(), order: this.#order, run }
    this.#order += 1
    const heap = this.#planned
    let index = heap.push(step) - 1
    while (index > 0) {
      const parent = (index - 1) >> 1
      if (before(heap[parent]!, step)) break
      heap[index] = heap[parent]!
      index = parent
    }
    heap[index] = step
  }

  /** Lets everything that is planned happen, in order of time. */
  run(): void {
    for (let step = this.#next(); step; step = this.#next()) step.run(new Date(step.at))
  }

  #next(): Planned | undefined {
    const heap = this.#planned
    const first = heap[0]
    const last = heap.pop()
    if (!first || !last || heap.length === 0) return first
    let index = 0
    for (;;) {
      let child = 2 * index + 1
      if (child >= heap.length) break
      if (child + 1 < heap.length && before(heap[child + 1]!, heap[child]!)) child += 1
      if (!before(heap[child]!, last)) break
      heap[index] = heap[child]!
      index = child
    }
    heap[index] = last
    return first
  }

  /** One change of a call: the room's next revision, the call's next version, and what is said about it. */
  changed(call: DemoCall, at: Date, actor: DemoPerson, happened: readonly Happened[]): void {
    const room = this.#room(call.of.room)
    room.revision += 1
    if (call.revision > 0) call.version += 1
    call.revision = room.revision
    for (const [type, item, data] of happened) this.#tell(call.of, call, item, at, actor, type, data ?? {})
  }

  /** One change of a case. */
  caseChanged(
    of: DemoCase,
    at: Date,
    actor: DemoPerson,
    type: EventType,
    data: Record<string, unknown> = {},
  ): void {
    of.version += 1
    this.#tell(of, null, null, at, actor, type, data)
  }

  #tell(
    of: DemoCase,
    call: DemoCall | null,
    item: DemoItem | null,
    at: Date,
    actor: DemoPerson,
    type: EventType,
    data: Record<string, unknown>,
  ): void {
    const room = this.#room(of.room)
    room.eventSeq += 1
    room.lastEventAt = Math.max(room.lastEventAt, at.getTime())
    this.events.push({ room: of.room, seq: room.eventSeq, type, at, of, call, item, actor, data })
  }

  #room(number: number): { revision: number; eventSeq: number; lastEventAt: number } {
    const known = this.rooms.get(number)
    if (known) return known
    const fresh = { revision: 0, eventSeq: 0, lastEventAt: 0 }
    this.rooms.set(number, fresh)
    return fresh
  }
}

const before = (a: Planned, b: Planned): boolean => a.at < b.at || (a.at === b.at && a.order < b.order)
