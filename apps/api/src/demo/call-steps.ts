import type { CallKind } from '@bellpull/domain'
import type { Books, DemoCall, DemoCase } from './books.js'
import { Holding, type Wanted } from './holding.js'
import { demoId } from './ids.js'
import type { DemoPerson } from './people.js'
import { StoryFault } from './rules.js'
import type { Stock } from './stock.js'
import type { HouseDays } from './story-time.js'

export interface CallDraft {
  readonly of: DemoCase
  readonly kind: CallKind
  readonly calledBy: DemoPerson
  readonly enteredBy: DemoPerson
  readonly wanted: readonly Wanted[]
}

/** The steps that a whole call takes. */
export class CallSteps {
  protected readonly holding: Holding

  constructor(
    readonly books: Books,
    readonly stock: Stock,
    readonly days: HouseDays,
  ) {
    this.holding = new Holding(stock, days)
  }

  /** A call that is going to be made; nothing is held before {@link call}. */
  draft(draft: CallDraft, name: string): DemoCall {
    const call: DemoCall = {
      id: demoId('call', name),
      of: draft.of,
      kind: draft.kind,
      neededAt: null,
      calledAt: new Date(0),
      calledBy: draft.calledBy,
      enteredBy: draft.enteredBy,
      readBackBy: null,
      readBackAt: null,
      confirmedAt: null,
      revision: 0,
      version: 1,
      items: [],
    }
    for (const wanted of draft.wanted) this.holding.add(call, wanted, null)
    return call
  }

  /**
   * @param neededInMinutes from the call; `null` exactly for stand by.
   * @param data more that the event of the call says.
   */
  call(call: DemoCall, at: Date, neededInMinutes: number | null, data: Record<string, unknown> = {}): void {
    const { calledBy, of } = call
    if (of.status !== 'planned' && of.status !== 'inProgress')
      throw new StoryFault(`a call for ${of.number}, which is ${of.status}`)
    if (calledBy.role !== 'surgeon' && calledBy !== of.scrub)
      throw new StoryFault(`${calledBy.name} may not call for ${of.number}`)
    call.calledAt = at
    call.neededAt = neededInMinutes === null ? null : new Date(at.getTime() + neededInMinutes * 60_000)
    call.confirmedAt = call.kind === 'confirmed' ? at : null
    this.books.calls.push(call)
    of.calls.push(call)
    for (const item of call.items) {
      this.books.items.push(item)
      this.holding.hold(item, at, neededInMinutes === 0)
    }
    this.books.changed(call, at, call.enteredBy, [
      [
        'call.called',
        null,
        {
          kind: call.kind,
          neededAt: call.neededAt?.toISOString() ?? null,
          calledBy: calledBy.id,
          items: call.items.map((item) => ({
            itemId: item.id,
            label: item.product?.label ?? item.text,
            variant: item.product?.variant ?? null,
            hold: item.hold,
            unitId: item.unit?.id ?? null,
          })),
          ...data,
        },
      ],
    ])
  }

  readBack(call: DemoCall, at: Date, by: DemoPerson): void {
    if (by === call.calledBy) throw new StoryFault(`${by.name} reads back an own call`)
    call.readBackBy = by
    call.readBackAt = at
    this.books.changed(call, at, by, [['call.readBack', null]])
  }

  confirm(call: DemoCall, at: Date, by: DemoPerson, neededInMinutes?: number): void {
    if (call.readBackBy === null || call.kind === 'confirmed')
      throw new StoryFault('confirmed before read back')
    const from = call.kind
    if (neededInMinutes !== undefined) call.neededAt = new Date(at.getTime() + neededInMinutes * 60_000)
    call.kind = 'confirmed'
    call.confirmedAt = at
    this.books.changed(call, at, by, [
      ['call.confirmed', null, { from, neededAt: call.neededAt?.toISOString() ?? null }],
    ])
  }
}
