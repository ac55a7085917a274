import { randomUUID } from 'node:crypto'
import type { CaseStatus, MakeCall } from '@bellpull/contracts'
import { CATEGORY_RULES, NOW_WITHIN_MS, type CaseSide, type Category, type Side } from '@bellpull/domain'
import type { CallTransaction, Tap } from './call-transaction.js'
import type { CallWork } from './call-work.js'
import { holdFor, roomsWithEarlyHolds, soonUntil } from './holds.js'
import { itemParameters, MAKE_CALL } from './make-call.sql.js'
import { refusedText } from './refused-text.js'
import type { CallRow } from './rows.js'
import { databaseFault } from '../../platform/db/sql.js'
import type { StoredAnswer } from '../../platform/http/idempotency.js'
import { Problem } from '../../platform/http/problem.js'

const UNIQUE_VIOLATION = '23505'
const DEADLOCK = '40P01'

interface Wanted {
  readonly id: string
  readonly catalogueItemId: string | null
  readonly text: string | null
}

interface OpenCase {
  readonly id: string
  readonly roomId: string
  readonly side: CaseSide
  readonly status: CaseStatus
}

interface Product {
  readonly id: string
  readonly category: Category
  readonly side: Side
  readonly stocked: boolean
  readonly label: string
  readonly variant: string | null
}

/** Makes calls: at once where all is in order, carefully where anything is not. */
export class CallMaker {
  constructor(private readonly transaction: CallTransaction) {}

  async make(tap: Tap, caseId: string, body: MakeCall): Promise<StoredAnswer> {
    const wanted = body.items.flatMap((line): Wanted[] =>
      'text' in line
        ? [{ id: randomUUID(), catalogueItemId: null, text: line.text }]
        : Array.from({ length: line.quantity }, () => ({
            id: randomUUID(),
            catalogueItemId: line.catalogueItemId,
            text: null,
          })),
    )
    return (await this.#atOnce(tap, caseId, body, wanted)) ?? this.#carefully(tap, caseId, body, wanted)
  }

  /** One statement; `null` when it found anything out of order and wrote nothing. */
  async #atOnce(
    tap: Tap,
    caseId: string,
    body: MakeCall,
    wanted: readonly Wanted[],
  ): Promise<StoredAnswer | null> {
    if (wanted.some((item) => item.catalogueItemId === null)) return null
    const { db, clock } = this.transaction
    const now = clock.now()
    const today = clock.today()
    try {
      const { rows } = await db.query<{ roomId: string; revision: number; body: string }>({
        name: 'make-call',
        text: MAKE_CALL,
        values: [
          tap.actor.id,
          tap.use.key,
          tap.use.path,
          tap.use.requestHash,
          now.toISOString(),
          today,
          isWantedNow(body),
          soonUntil(today),
          caseId,
          randomUUID(),
          body.kind,
          neededAt(body, now)?.toISOString() ?? null,
          body.calledBy,
          body.side,
          ...itemParameters(wanted),
        ],
      })
      const made = rows[0]
      if (!made) return null
      this.transaction.tell({ ...made, event: 'call.called' })
      this.transaction.stockChanged([...new Set(wanted.map((item) => item.catalogueItemId!))])
      return { status: 201, answer: made.body }
    } catch (error) {
      // A rival with the same key, or two calls in each other's way: the careful way sorts it out.
      const code = databaseFault(error)?.code
      if (code === UNIQUE_VIOLATION || code === DEADLOCK) return null
      throw error
    }
  }

  #carefully(tap: Tap, caseId: string, body: MakeCall, wanted: readonly Wanted[]): Promise<StoredAnswer> {
    return this.transaction.run(tap, 201, async (work) => {
      demandCalledHere(body)
      const openCase = await getCase(work, caseId)
      await demandCaller(work, caseId, body.calledBy)
      const products = await getProducts(work, wanted)
      demandKnown(body, products)
      demandSide(body, openCase, products)
      if (openCase.status !== 'planned' && openCase.status !== 'inProgress') throw new Problem('case-closed')

      const mayTake =
        body.kind === 'confirmed'
          ? await roomsWithEarlyHolds(work.sql, [...products.keys()], openCase.roomId, work.today)
          : []
      await work.lockRooms([openCase.roomId, ...mayTake])
      // The case may have been signed out while its room was locked by somebody else.
      const now = await getCase(work, caseId)
      if (now.status !== 'planned' && now.status !== 'inProgress') throw new Problem('case-closed')

      const call = await insertCall(work, openCase, body)
      await insertItems(work, call, wanted, products)
      await holdAll(work, call, body, wanted, products)
      const { rows } = await work.sql.query<{ itemId: string; hold: string; unitId: string | null }>({
        text: 'SELECT id AS "itemId", hold, unit_id AS "unitId" FROM item WHERE call_id = $1 ORDER BY line_no',
        values: [call.id],
      })
      work.event(call, null, 'call.called', {
        kind: body.kind,
        neededAt: call.neededAt?.toISOString() ?? null,
        calledBy: body.calledBy,
        items: rows.map((row, index) => ({ ...row, ...named(wanted[index], products) })),
      })
      return call.id
    })
  }
}

/** Blood, medicines, specimens and tissue have their own ways. @throws {Problem} `not-called-here` */
function demandCalledHere(body: MakeCall): void {
  body.items.forEach((line, index) => {
    const refused = 'text' in line ? refusedText(line.text) : null
    if (refused)
      throw new Problem('not-called-here', {
        detail: refused,
        errors: [{ pointer: `/items/${index}/text`, message: refused }],
      })
  })
}

const isWantedNow = (body: MakeCall): boolean =>
  body.kind === 'confirmed' && body.neededInMinutes !== null && body.neededInMinutes * 60_000 < NOW_WITHIN_MS

const neededAt = (body: MakeCall, now: Date): Date | null =>
  body.neededInMinutes === null ? null : new Date(now.getTime() + body.neededInMinutes * 60_000)

const named = (item: Wanted | undefined, products: Map<string, Product>) => {
  const product = products.get(item?.catalogueItemId ?? '')
  return { label: product?.label ?? item?.text ?? '', variant: product?.variant ?? null }
}

async function getCase(work: CallWork, caseId: string): Promise<OpenCase> {
  const { rows } = await work.sql.query<OpenCase>({
    name: 'get-case-for-call',
    text: 'SELECT id, room_id AS "roomId", side, status FROM surgical_case WHERE id = $1',
    values: [caseId],
  })
  if (!rows[0]) throw new Problem('not-found')
  return rows[0]
}

/** A surgeon, or a scrub person of the case's team: those whose word a call is. */
async function demandCaller(work: CallWork, caseId: string, personId: string): Promise<void> {
  const { rows } = await work.sql.query<{ may: boolean }>({
    name: 'may-call',
    text: `SELECT p.active AND (p.role = 'surgeon' OR (p.role = 'scrub' AND EXISTS
                  (SELECT 1 FROM case_member m WHERE m.case_id = $2 AND m.person_id = p.id))) AS may
             FROM person p WHERE p.id = $1`,
    values: [personId, caseId],
  })
  if (!rows[0]?.may)
    throw new Problem('not-a-caller', { detail: 'A surgeon calls, or a scrub person of the case’s team.' })
}

async function getProducts(work: CallWork, wanted: readonly Wanted[]): Promise<Map<string, Product>> {
  const ids = [...new Set(wanted.flatMap((item) => item.catalogueItemId ?? []))]
  const { rows } = await work.sql.query<Product>({
    name: 'get-products',
    text: 'SELECT id, category, side, stocked, label, variant FROM catalogue_item WHERE id = ANY($1::uuid[]) AND active',
    values: [ids],
  })
  return new Map(rows.map((product) => [product.id, product]))
}

function demandKnown(body: MakeCall, products: Map<string, Product>): void {
  const errors = body.items.flatMap((line, index) =>
    'catalogueItemId' in line && !products.has(line.catalogueItemId)
      ? [{ pointer: `/items/${index}/catalogueItemId`, message: 'is not in the catalogue' }]
      : [],
  )
  if (errors.length > 0) throw new Problem('unknown-item', { errors })
}

function demandSide(body: MakeCall, openCase: OpenCase, products: Map<string, Product>): void {
  if (body.side !== openCase.side)
    throw new Problem('side-not-of-case', { detail: `The case is ${openCase.side.toUpperCase()}.` })
  const errors = body.items.flatMap((line, index) => {
    const side = 'catalogueItemId' in line ? products.get(line.catalogueItemId)?.side : 'either'
    return side === 'either' || side === openCase.side
      ? []
      : [
          {
            pointer: `/items/${index}/catalogueItemId`,
            message: `is a ${side} part; the case is ${openCase.side}`,
          },
        ]
  })
  if (errors.length > 0) throw new Problem('side-not-of-case', { errors })
}

async function insertCall(work: CallWork, openCase: OpenCase, body: MakeCall): Promise<CallRow> {
  const call: CallRow = {
    id: randomUUID(),
    caseId: openCase.id,
    roomId: openCase.roomId,
    caseSide: openCase.side,
    caseStatus: openCase.status,
    kind: body.kind,
    neededAt: neededAt(body, work.now),
    calledAt: work.now,
    calledBy: body.calledBy,
    readBackBy: null,
    version: 1,
  }
  work.created(call)
  await work.sql.query({
    name: 'insert-call',
    text: `INSERT INTO call (id, case_id, room_id, kind, needed_at, called_at, called_by, entered_by, confirmed_at, revision)
           VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, 0)`,
    values: [
      call.id,
      call.caseId,
      call.roomId,
      call.kind,
      call.neededAt,
      work.now,
      call.calledBy,
      work.actor.id,
      call.kind === 'confirmed' ? work.now : null,
    ],
  })
  return call
}

async function insertItems(
  work: CallWork,
  call: CallRow,
  wanted: readonly Wanted[],
  products: Map<string, Product>,
): Promise<void> {
  const rows = wanted.map((item, index) => {
    const product = products.get(item.catalogueItemId ?? '')
    const category = product?.category ?? 'other'
    const holds = CATEGORY_RULES[category].holdsUnit && product?.stocked
    return {
      id: item.id,
      line_no: index + 1,
      catalogue_item_id: item.catalogueItemId,
      text: item.text,
      category,
      side: product?.side ?? 'either',
      hold: holds ? 'noneFree' : 'notStocked',
    }
  })
  await work.sql.query({
    name: 'insert-items',
    text: `INSERT INTO item (id, call_id, line_no, catalogue_item_id, text, category, side, hold)
           SELECT i.id, $1, i.line_no, i.catalogue_item_id, i.text, i.category, i.side, i.hold
             FROM json_to_recordset($2::json) AS i(id uuid, line_no smallint, catalogue_item_id uuid, text text,
                  category text, side text, hold text)`,
    values: [call.id, JSON.stringify(rows)],
  })
}

/** Holds a package for every item that wants one, in order of product so that two calls cannot entangle. */
async function holdAll(
  work: CallWork,
  call: CallRow,
  body: MakeCall,
  wanted: readonly Wanted[],
  products: Map<string, Product>,
): Promise<void> {
  const stocked = wanted
    .flatMap((item) => {
      const product = products.get(item.catalogueItemId ?? '')
      return product?.stocked ? [{ itemId: item.id, catalogueItemId: product.id }] : []
    })
    .sort((a, b) => a.catalogueItemId.localeCompare(b.catalogueItemId))
  for (const item of stocked) {
    const wish = {
      ...item,
      roomId: call.roomId,
      caseSide: call.caseSide,
      kind: body.kind,
      now: isWantedNow(body),
    }
    const unit = await holdFor(work, wish, call)
    if (!unit) continue
    await work.sql.query({
      name: 'set-hold',
      text: "UPDATE item SET hold = 'held', unit_id = $2 WHERE id = $1",
      values: [item.itemId, unit.id],
    })
  }
}
