import type { EventType } from '@bellpull/contracts'
import { CATEGORY_RULES, type ItemCommandName } from '@bellpull/domain'
import type { DemoItem } from './books.js'
import { CallSteps } from './call-steps.js'
import type { Product } from './catalogue.js'
import { unitFacts } from './holding.js'
import type { DemoPerson } from './people.js'
import { placeOf } from './places.js'
import { StoryFault, demandStep } from './rules.js'

/** The steps of the job as the house takes them, each held against the table of the domain. */
export class Steps extends CallSteps {
  accept(items: readonly DemoItem[], at: Date, by: DemoPerson): void {
    this.#step(items, 'accept', at, by, 'item.accepted', (item) => {
      if (item.hold === 'noneFree') throw new StoryFault('accepted without a package')
      Object.assign(item, { stage: 'accepted', acceptedBy: by, acceptedAt: at })
      return {}
    })
  }

  pull(items: readonly DemoItem[], at: Date, by: DemoPerson, typed = false): void {
    this.#step(items, 'pull', at, by, 'item.pulled', (item) => {
      if (item.hold === 'noneFree') throw new StoryFault('pulled without a package')
      if (item.acceptedBy === null) Object.assign(item, { acceptedBy: by, acceptedAt: at })
      Object.assign(item, { stage: 'pulled', pulledAt: at, typed })
      if (item.unit)
        this.stock.set(
          item.unit,
          { state: 'pulled', heldFor: item, place: placeOf('Hatch') },
          { at, actor: by, why: 'pulled', item },
        )
      return item.unit ? { ...unitFacts(item.unit), typed } : {}
    })
  }

  deliver(items: readonly DemoItem[], at: Date, by: DemoPerson): void {
    this.#step(items, 'deliver', at, by, 'item.delivered', (item) => {
      if (item.acceptedBy === null) Object.assign(item, { acceptedBy: by, acceptedAt: at })
      Object.assign(item, { stage: 'inRoom', inRoomAt: at })
      if (item.unit)
        this.stock.set(
          item.unit,
          { state: 'inRoom', heldFor: item, place: placeOf(`R${item.call.of.room}`) },
          { at, actor: by, why: 'delivered', item },
        )
      return unitFacts(item.unit)
    })
  }

  /** @param checker the second person, for what two people check; the way it was done. */
  verify(
    items: readonly DemoItem[],
    at: Date,
    by: DemoPerson,
    check?: { readonly checker: DemoPerson; readonly method: 'spoken' | 'pin' },
  ): void {
    this.#step(items, 'verify', at, by, 'item.verified', (item) => {
      if (item.call.readBackBy === null) throw new StoryFault('verified before it was read back')
      const second = CATEGORY_RULES[item.category].check === 'two-people' ? check : undefined
      if (second === undefined && CATEGORY_RULES[item.category].check === 'two-people')
        throw new StoryFault('an implant verified by one')
      if (second?.checker === by) throw new StoryFault('both checks by one person')
      if (item.unit && item.unit.useByOn < this.days.of(at).day) throw new StoryFault('expired at verify')
      Object.assign(item, {
        stage: 'verified',
        verifiedAt: at,
        checkedBy: second?.checker ?? null,
        secondCheck: second?.method ?? null,
      })
      return {
        ...unitFacts(item.unit),
        typed: item.typed,
        checkedBy: second?.checker.id ?? null,
        method: second?.method ?? null,
      }
    })
  }

  /** A check that stopped something: nothing moves, but it is told. */
  refuse(item: DemoItem, at: Date, by: DemoPerson, data: Record<string, unknown>): void {
    if (item.stage !== 'inRoom') throw new StoryFault('refused at verify, but not in the room')
    this.books.changed(item.call, at, by, [['item.verifyRefused', item, data]])
  }

  open(items: readonly DemoItem[], at: Date, by: DemoPerson): void {
    this.#step(items, 'open', at, by, 'item.opened', (item) => {
      Object.assign(item, { stage: 'opened', openedAt: at })
      if (item.unit)
        this.stock.set(item.unit, { state: 'opened', heldFor: item }, { at, actor: by, why: 'opened', item })
      return { ...unitFacts(item.unit), scannedAgain: false }
    })
  }

  /** Implanted, or used: the good end. */
  done(items: readonly DemoItem[], at: Date, by: DemoPerson): void {
    for (const outcome of ['implanted', 'used'] as const) {
      const these = items.filter((item) => CATEGORY_RULES[item.category].doneAs === outcome)
      const command = outcome === 'implanted' ? 'implant' : 'use'
      this.#step(these, command, at, by, `item.${outcome}`, (item) =>
        this.holding.settle(item, at, by, outcome, null),
      )
    }
  }

  notImplanted(item: DemoItem, at: Date, by: DemoPerson, reason: string): void {
    this.#step([item], 'notImplanted', at, by, 'item.notImplanted', () => ({
      ...this.holding.settle(item, at, by, 'notImplanted', reason),
      reason,
    }))
  }

  putBack(
    items: readonly DemoItem[],
    at: Date,
    by: DemoPerson,
    reason: string | null,
    inspect = false,
  ): void {
    this.#step(items, 'putBack', at, by, 'item.returned', (item) => {
      Object.assign(item, { outcome: 'returned', settledAt: at, reason })
      this.holding.startPutBack(item, at, by, inspect)
      return { ...unitFacts(item.unit), reason, inspect }
    })
  }

  shelve(item: DemoItem, at: Date, by: DemoPerson): void {
    this.#step([item], 'shelve', at, by, 'item.shelved', () => {
      const inspect = item.putBackInspect
      item.putBackDoneAt = at
      const place = inspect ? placeOf('Q') : item.putBackTo!
      if (item.unit)
        this.stock.set(
          item.unit,
          { state: inspect ? 'quarantined' : 'available', heldFor: null, place },
          { at, actor: by, why: inspect ? 'to inspection' : 'shelved', item },
        )
      return { ...unitFacts(item.unit), inspect, binCode: inspect ? null : place.code }
    })
  }

  cancel(item: DemoItem, at: Date, by: DemoPerson, reason: string | null): void {
    this.#step([item], 'cancel', at, by, 'item.cancelled', () => {
      const facts = unitFacts(item.unit)
      Object.assign(item, { outcome: 'cancelled', settledAt: at, reason })
      this.holding.letGo(item, at, by, 'cancelled')
      return { reason, ...facts }
    })
  }

  /** Another size: the old item ends, and a new one of the same call is called. @returns the new one. */
  change(item: DemoItem, at: Date, by: DemoPerson, to: Product, reason: string): DemoItem {
    const command = item.hold === 'noneFree' ? 'choose' : 'change'
    const { call } = item
    demandStep(item, command, by)
    Object.assign(item, { outcome: 'changed', settledAt: at, reason })
    item.version += 1
    this.holding.letGo(item, at, by, 'changed')
    const next = this.holding.add(call, { product: to }, item)
    this.books.items.push(next)
    this.holding.hold(next, at, false)
    this.books.changed(call, at, by, [
      [
        'item.changed',
        item,
        { ...unitFacts(item.unit), toItemId: next.id, label: to.label, variant: to.variant ?? null, reason },
      ],
    ])
    return next
  }

  /** A package that may not be used: it goes to quarantine, and the item begins again with another. */
  reject(item: DemoItem, at: Date, by: DemoPerson, reason: string): void {
    demandStep(item, 'reject', by)
    const bad = item.unit
    if (!bad) throw new StoryFault('rejected without a package')
    bad.note = reason
    this.stock.set(
      bad,
      { state: 'quarantined', heldFor: null, place: placeOf('Q') },
      { at, actor: by, why: `rejected: ${reason}`, item },
    )
    Object.assign(item, {
      stage: 'called',
      unit: null,
      acceptedBy: null,
      acceptedAt: null,
      offeredTo: null,
      pulledAt: null,
      inRoomAt: null,
      verifiedAt: null,
      checkedBy: null,
      secondCheck: null,
    })
    item.version += 1
    this.holding.hold(item, at, true)
    this.books.changed(item.call, at, by, [
      ['item.rejected', item, { ...unitFacts(bad), reason }],
      ['item.heldAgain', item, unitFacts(item.unit)],
    ])
  }

  handOver(items: readonly DemoItem[], at: Date, by: DemoPerson, to: DemoPerson): void {
    this.#step(items, 'handOver', at, by, 'item.handedOver', (item) => {
      item.offeredTo = to
      return { toPersonId: to.id }
    })
  }

  take(items: readonly DemoItem[], at: Date, by: DemoPerson): void {
    this.#step(items, 'take', at, by, 'item.taken', (item) => {
      if (item.offeredTo !== by) throw new StoryFault('taken without an offer')
      const from = item.acceptedBy
      Object.assign(item, { offeredTo: null, acceptedBy: by })
      return { fromPersonId: from?.id ?? null }
    })
  }

  takeOver(item: DemoItem, at: Date, by: DemoPerson): void {
    this.#step([item], 'takeOver', at, by, 'item.takenOver', () => {
      const from = item.acceptedBy
      item.acceptedBy = by
      return { fromPersonId: from?.id ?? null }
    })
  }

  /** One command on items of one call: one change, one event for each item. */
  #step(
    items: readonly DemoItem[],
    command: ItemCommandName,
    at: Date,
    by: DemoPerson,
    type: EventType,
    act: (item: DemoItem) => Record<string, unknown>,
  ): void {
    const [first] = items
    if (!first) return
    if (items.some((item) => item.call !== first.call)) throw new StoryFault('items of several calls at once')
    const happened = items.map((item) => {
      demandStep(item, command, by)
      const data = act(item)
      item.version += 1
      return [type, item, data] as const
    })
    this.books.changed(first.call, at, by, happened)
  }
}
