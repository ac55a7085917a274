import type { CaseStatus } from '@bellpull/contracts'
import type {
  CallKind,
  CaseSide,
  Category,
  Hold,
  Outcome,
  PartKind,
  Side,
  Stage,
  UndoableCommand,
  UnitState,
} from '@bellpull/domain'
import type { Sql } from '../../platform/db/sql.js'

/** A call with what its case says, as the commands need it. */
export interface CallRow {
  readonly id: string
  readonly caseId: string
  readonly roomId: string
  readonly caseSide: CaseSide
  readonly caseStatus: CaseStatus
  readonly kind: CallKind
  readonly neededAt: Date | null
  readonly calledAt: Date
  readonly calledBy: string
  readonly readBackBy: string | null
  readonly version: number
}

/** What undo needs to take the last step back. */
export interface LastStep {
  readonly command: UndoableCommand
  readonly by: string
  /** ISO 8601. */
  readonly at: string
  readonly item: Partial<Record<string, unknown>>
  readonly unit: { readonly id: string; readonly state: UnitState; readonly locationId: string } | null
}

export interface ItemRow {
  readonly id: string
  readonly callId: string
  readonly catalogueItemId: string | null
  readonly category: Category
  readonly side: Side
  readonly stage: Stage
  readonly outcome: Outcome | null
  readonly hold: Hold
  readonly unitId: string | null
  readonly acceptedBy: string | null
  readonly acceptedAt: Date | null
  readonly pulledAt: Date | null
  readonly inRoomAt: Date | null
  readonly verifiedAt: Date | null
  readonly openedAt: Date | null
  readonly settledAt: Date | null
  readonly checkedBy: string | null
  readonly secondCheck: string | null
  readonly typed: boolean
  readonly reason: string | null
  readonly putBackTo: string | null
  readonly putBackSince: Date | null
  readonly putBackInspect: boolean
  readonly putBackDoneAt: Date | null
  readonly lastStep: LastStep | null
  readonly version: number
  readonly product: ProductRow | null
}

export interface ProductRow {
  readonly id: string
  readonly ref: string
  readonly gtin: string
  readonly label: string
  readonly variant: string | null
  readonly size: string | null
  readonly kind: PartKind
  readonly systemId: string | null
  readonly side: Side
}

export interface UnitRow {
  readonly id: string
  readonly catalogueItemId: string
  readonly lot: string
  readonly serial: string | null
  /** `YYYY-MM-DD` */
  readonly useByOn: string
  readonly state: UnitState
  readonly heldFor: string | null
  readonly locationId: string
  readonly homeLocationId: string
  readonly placeRoomId: string | null
  readonly sterile: boolean
  readonly side: Side
}

const PRODUCT = (alias: string): string => `json_build_object(
  'id', ${alias}.id, 'ref', ${alias}.ref, 'gtin', ${alias}.gtin, 'label', ${alias}.label, 'variant', ${alias}.variant,
  'size', ${alias}.size, 'kind', ${alias}.kind, 'systemId', ${alias}.system_id, 'side', ${alias}.side)`

/** Columns of an item by the name that the code gives them. */
export const ITEM_COLUMNS: Readonly<Record<string, string>> = {
  stage: 'stage',
  outcome: 'outcome',
  hold: 'hold',
  unitId: 'unit_id',
  acceptedBy: 'accepted_by',
  acceptedAt: 'accepted_at',
  pulledAt: 'pulled_at',
  inRoomAt: 'in_room_at',
  verifiedAt: 'verified_at',
  openedAt: 'opened_at',
  settledAt: 'settled_at',
  checkedBy: 'checked_by',
  secondCheck: 'second_check',
  typed: 'typed',
  reason: 'reason',
  putBackTo: 'put_back_to',
  putBackSince: 'put_back_since',
  putBackInspect: 'put_back_inspect',
  putBackDoneAt: 'put_back_done_at',
  lastStep: 'last_step',
}

const ITEM_FIELDS = Object.entries(ITEM_COLUMNS)
  .map(([field, column]) => `i.${column} AS "${field}"`)
  .join(', ')

const SELECT_UNIT = `
  SELECT u.id, u.catalogue_item_id AS "catalogueItemId", u.lot, u.serial, u.use_by_on::text AS "useByOn", u.state,
         u.held_for AS "heldFor", u.location_id AS "locationId", u.home_location_id AS "homeLocationId",
         u.place_room_id AS "placeRoomId", u.sterile, ci.side
    FROM unit u JOIN catalogue_item ci ON ci.id = u.catalogue_item_id`

/** Where a call or an item belongs; read before anything is locked. */
export async function findCallOf(
  sql: Sql,
  of: { callId: string } | { itemId: string },
): Promise<{ id: string; roomId: string } | null> {
  const { rows } = await sql.query<{ id: string; roomId: string }>(
    'callId' in of
      ? {
          name: 'find-call',
          text: 'SELECT id, room_id AS "roomId" FROM call WHERE id = $1',
          values: [of.callId],
        }
      : {
          name: 'find-call-of-item',
          text: 'SELECT c.id, c.room_id AS "roomId" FROM item i JOIN call c ON c.id = i.call_id WHERE i.id = $1',
          values: [of.itemId],
        },
  )
  return rows[0] ?? null
}

export async function getCalls(sql: Sql, ids: readonly string[]): Promise<CallRow[]> {
  const { rows } = await sql.query<CallRow>({
    name: 'get-calls',
    text: `SELECT c.id, c.case_id AS "caseId", c.room_id AS "roomId", k.side AS "caseSide", k.status AS "caseStatus", c.kind,
                  c.needed_at AS "neededAt", c.called_at AS "calledAt", c.called_by AS "calledBy",
                  c.read_back_by AS "readBackBy", c.version
             FROM call c JOIN surgical_case k ON k.id = c.case_id
            WHERE c.id = ANY($1::uuid[]) ORDER BY c.id`,
    values: [ids],
  })
  return rows
}

/** Items in the order of their lines, one call or some items. */
export async function getItems(sql: Sql, by: { callId: string } | { itemId: string }): Promise<ItemRow[]> {
  const column = 'callId' in by ? 'i.call_id' : 'i.id'
  const { rows } = await sql.query<ItemRow>({
    name: `get-items-${column}`,
    text: `SELECT i.id, i.call_id AS "callId", i.catalogue_item_id AS "catalogueItemId", i.category, i.side,
                  ${ITEM_FIELDS}, i.version,
                  CASE WHEN ci.id IS NOT NULL THEN ${PRODUCT('ci')} END AS product
             FROM item i LEFT JOIN catalogue_item ci ON ci.id = i.catalogue_item_id
            WHERE ${column} = $1 ORDER BY i.line_no`,
    values: ['callId' in by ? by.callId : by.itemId],
  })
  return rows
}

/** Locks one package; waits for whoever has it. */
export async function lockUnit(sql: Sql, unitId: string): Promise<UnitRow> {
  const { rows } = await sql.query<UnitRow>({
    name: 'lock-unit',
    text: `${SELECT_UNIT} WHERE u.id = $1 FOR UPDATE OF u`,
    values: [unitId],
  })
  const unit = rows[0]
  if (!unit) throw new Error(`unit ${unitId} is gone`)
  return unit
}

/** What `sameAsTyped` of the domain says, where $4: nobody can be sure of case and spaces on a printed label. */
const same = (column: string, said: string): string =>
  `(${column} = ${said} OR $4::boolean AND upper(replace(${column}, ' ', '')) = upper(replace(${said}, ' ', '')))`

/** Packages that bear this label, not locked: lot as printed, serial where the label has one. */
export async function findUnitsByLabel(
  sql: Sql,
  label: { catalogueItemId: string; lot: string | undefined; serial: string | undefined; typed: boolean },
): Promise<UnitRow[]> {
  const { rows } = await sql.query<UnitRow>({
    name: 'find-units-by-label',
    text: `${SELECT_UNIT}
            WHERE u.catalogue_item_id = $1 AND ($2::text IS NULL OR ${same('u.lot', '$2::text')})
              AND ($3::text IS NULL OR ${same('u.serial', '$3::text')})
            ORDER BY u.use_by_on, u.id`,
    values: [label.catalogueItemId, label.lot ?? null, label.serial ?? null, label.typed],
  })
  return rows
}

/** The product behind a label's number. */
export async function findProduct(
  sql: Sql,
  by: { gtin: string } | { ref: string } | { lic: string; product: string },
): Promise<ProductRow | null> {
  const [condition, values] =
    'gtin' in by
      ? ['ci.gtin = $1', [by.gtin]]
      : 'ref' in by
        ? ['upper(ci.ref) = upper($1)', [by.ref]]
        : ['ci.hibc_lic = $1 AND ci.hibc_product = $2', [by.lic, by.product]]
  const { rows } = await sql.query<{ product: ProductRow }>({
    text: `SELECT ${PRODUCT('ci')} AS product FROM catalogue_item ci WHERE ${condition}`,
    values: [...values],
  })
  return rows[0]?.product ?? null
}
