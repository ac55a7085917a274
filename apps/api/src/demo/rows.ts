import type { Books, DemoCall, DemoCase, DemoItem } from './books.js'
import { catalogueRows, supplierRows, systemId, systemRows } from './catalogue.js'
import { ROOM_NUMBERS, placeRows, roomId, settingRows } from './places.js'
import type { Stock } from './stock.js'

/** Rows of one table by the names of its columns. */
export interface TableRows {
  readonly table: string
  readonly rows: readonly Readonly<Record<string, unknown>>[]
}

/** Everything of the house except its people, in an order in which each row finds what it refers to. */
export function tableRows(books: Books, stock: Stock, filledAt: Date): TableRows[] {
  return [
    { table: 'house_setting', rows: settingRows(filledAt) },
    { table: 'room', rows: roomRows(books) },
    { table: 'location', rows: placeRows() },
    { table: 'supplier', rows: supplierRows() },
    { table: 'implant_system', rows: systemRows() },
    { table: 'catalogue_item', rows: catalogueRows() },
    { table: 'unit', rows: unitRows(stock) },
    { table: 'surgical_case', rows: books.cases.map(caseRow) },
    { table: 'case_member', rows: books.cases.flatMap(memberRows) },
    { table: 'case_plan_line', rows: books.cases.flatMap(planRows) },
    { table: 'call', rows: books.calls.map(callRow) },
    { table: 'item', rows: books.items.map(itemRow) },
    { table: 'event', rows: eventRows(books) },
    { table: 'movement', rows: movementRows(books) },
  ]
}

const roomRows = (books: Books): Record<string, unknown>[] =>
  ROOM_NUMBERS.map((number) => {
    const room = books.rooms.get(number)
    return {
      id: roomId(number),
      number,
      revision: room?.revision ?? 0,
      event_seq: room?.eventSeq ?? 0,
      last_event_at: room ? new Date(room.lastEventAt) : '-infinity',
    }
  })

/** A package refers to the item that it is held for, and that item to the package: holds are set afterwards. */
const unitRows = (stock: Stock): Record<string, unknown>[] =>
  stock.units.map((unit) => ({
    id: unit.id,
    catalogue_item_id: unit.product.id,
    lot: unit.lot,
    serial: unit.serial,
    use_by_on: unit.useByOn,
    state: unit.heldFor ? 'available' : unit.state,
    location_id: unit.place.id,
    home_location_id: unit.home.id,
    carried_by: unit.carriedBy?.id ?? null,
    sterile: unit.sterile,
    owner: unit.owner,
    received_at: unit.receivedAt,
    note: unit.note,
  }))

/** The holds, as `unit` rows get them once the items are there. */
export const holdRows = (stock: Stock): { id: string; state: string; held_for: string }[] =>
  stock.units.flatMap((unit) =>
    unit.heldFor ? [{ id: unit.id, state: unit.state, held_for: unit.heldFor.id }] : [],
  )

const caseRow = (one: DemoCase): Record<string, unknown> => ({
  id: one.id,
  case_number: one.number,
  room_id: roomId(one.room),
  starts_at: one.startsAt,
  status: one.status,
  procedure_kind: one.procedure.kind,
  procedure_label: one.procedure.label,
  side: one.side,
  surgeon_id: one.surgeon.id,
  linked_case_id: one.linked?.id ?? null,
  started_at: one.startedAt,
  time_out_at: one.timeOutAt,
  time_out_ended_at: one.timeOutEndedAt,
  patient_out_at: one.patientOutAt,
  closed_at: one.closedAt,
  status_reason: one.statusReason,
  version: one.version,
})

const memberRows = (one: DemoCase): Record<string, unknown>[] =>
  [one.surgeon, one.scrub, one.circulator].map((person) => ({ case_id: one.id, person_id: person.id }))

const planRows = (one: DemoCase): Record<string, unknown>[] =>
  one.plan.map((line, index) => ({
    case_id: one.id,
    line_no: index + 1,
    kind: line.kind,
    system_id: systemId(line.system),
    variant: line.variant ?? null,
    planned: line.planned ?? null,
    size_from: line.from ?? null,
    size_to: line.to ?? null,
    hint: line.hint ?? null,
  }))

const isOpen = (call: DemoCall): boolean =>
  call.items.some((item) => item.outcome === null || (item.putBackTo !== null && item.putBackDoneAt === null))

const callRow = (call: DemoCall): Record<string, unknown> => ({
  id: call.id,
  case_id: call.of.id,
  room_id: roomId(call.of.room),
  kind: call.kind,
  needed_at: call.neededAt,
  called_at: call.calledAt,
  called_by: call.calledBy.id,
  entered_by: call.enteredBy.id,
  read_back_by: call.readBackBy?.id ?? null,
  read_back_at: call.readBackAt,
  confirmed_at: call.confirmedAt,
  open: isOpen(call),
  revision: call.revision,
  version: call.version,
})

const itemRow = (item: DemoItem): Record<string, unknown> => ({
  id: item.id,
  call_id: item.call.id,
  line_no: item.call.items.indexOf(item) + 1,
  catalogue_item_id: item.product?.id ?? null,
  text: item.text,
  category: item.category,
  side: item.side,
  stage: item.stage,
  outcome: item.outcome,
  hold: item.hold,
  unit_id: item.unit?.id ?? null,
  accepted_by: item.acceptedBy?.id ?? null,
  accepted_at: item.acceptedAt,
  offered_to: item.offeredTo?.id ?? null,
  pulled_at: item.pulledAt,
  in_room_at: item.inRoomAt,
  verified_at: item.verifiedAt,
  opened_at: item.openedAt,
  settled_at: item.settledAt,
  checked_by: item.checkedBy?.id ?? null,
  second_check: item.secondCheck,
  opened_unverified: false,
  typed: item.typed,
  reason: item.reason,
  put_back_to: item.putBackTo?.id ?? null,
  put_back_since: item.putBackSince,
  put_back_inspect: item.putBackInspect,
  put_back_done_at: item.putBackDoneAt,
  replaces_item_id: item.replaces?.id ?? null,
  version: item.version,
})

const eventRows = (books: Books): Record<string, unknown>[] =>
  books.events.map((event) => ({
    room_id: roomId(event.room),
    seq: event.seq,
    type: event.type,
    at: event.at,
    case_id: event.of.id,
    call_id: event.call?.id ?? null,
    item_id: event.item?.id ?? null,
    actor_id: event.actor.id,
    data: event.data,
  }))

/** In order of time, as their numbers would have grown. */
const movementRows = (books: Books): Record<string, unknown>[] =>
  [...books.movements]
    .sort((a, b) => a.at.getTime() - b.at.getTime())
    .map((movement) => ({
      unit_id: movement.unit.id,
      item_id: movement.item?.id ?? null,
      at: movement.at,
      actor_id: movement.actor.id,
      why: movement.why,
      from_location_id: movement.from?.id ?? null,
      to_location_id: movement.to.id,
      to_state: movement.toState,
    }))
