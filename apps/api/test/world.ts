import { randomUUID } from 'node:crypto'
import type { TestApi } from './app.js'

/** A small house for tests: one system of heads in two variants, two rooms, a core and a room cart. */
export interface World {
  readonly rooms: readonly [string, string]
  readonly core: string
  readonly roomCart: string
  readonly otherCart: string
  readonly systemId: string
  /** Catalogue ids by REF. */
  readonly items: Readonly<Record<string, string>>
  /** A case of room 1, planned, LEFT, at 10:30 of the clock's day unless said otherwise. */
  aCase(options?: CaseOptions): Promise<string>
  /** A package; free and in the core unless said otherwise. */
  aUnit(ref: string, options?: UnitOptions): Promise<string>
  /** A call with one item for each REF given, without a package, as if nothing had been free. */
  aCall(
    caseId: string,
    refs: readonly string[],
    ask?: (text: string, values: unknown[]) => Promise<unknown>,
  ): Promise<{ callId: string; itemIds: string[] }>
}

export interface CaseOptions {
  readonly room?: 0 | 1
  readonly status?: 'planned' | 'inProgress'
  readonly side?: 'left' | 'right'
  readonly startsAt?: string
  readonly team?: readonly string[]
}

export interface UnitOptions {
  readonly useByOn?: string
  readonly at?: string
  readonly state?: string
  readonly sterile?: boolean
  readonly heldFor?: string
}

const HEADS = [
  ['HD-48C', '48', 'concentric', 'either'],
  ['HD-50C', '50', 'concentric', 'either'],
  ['HD-50E', '50', 'eccentric', 'either'],
  ['FM-5L', '5', null, 'left'],
  ['FM-5R', '5', null, 'right'],
  ['CEM-1', '40 g', null, 'either'],
] as const

/** @param surgeonId whose cases they are. */
export async function layWorld(api: TestApi, surgeonId: string): Promise<World> {
  const [room1, room2, core, roomCart, otherCart, supplier, systemId] = Array.from({ length: 7 }, () =>
    randomUUID(),
  ) as [string, string, string, string, string, string, string]
  await api.rows('INSERT INTO room (id, number) VALUES ($1, 1), ($2, 2)', [room1, room2])
  await api.rows(
    `INSERT INTO location (id, code, zone, room_id, walk_order) VALUES
       ($1, 'A1-1', 'core', NULL, 10), ($2, 'R1', 'room', $4, 0), ($3, 'R2', 'room', $5, 0)`,
    [core, roomCart, otherCart, room1, room2],
  )
  await api.rows(`INSERT INTO supplier (id, name, email) VALUES ($1, 'Maker', 'orders@maker.example')`, [
    supplier,
  ])
  await api.rows(
    `INSERT INTO implant_system (id, name, maker, supplier_id) VALUES ($1, 'Sallowby', 'Maker', $2)`,
    [systemId, supplier],
  )
  const items: Record<string, string> = {}
  for (const [index, [ref, size, variant, side]] of HEADS.entries()) {
    const kind = ref.startsWith('HD') ? 'head' : ref.startsWith('FM') ? 'femur' : 'cement'
    const id = (items[ref] = randomUUID())
    await api.rows(
      `INSERT INTO catalogue_item (id, ref, gtin, system_id, supplier_id, category, kind, part_name, label, size,
         size_order, variant, diameter_mm, height_mm, side)
       VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11, $12, $13, $14, $15)`,
      [
        id,
        ref,
        String(9_521_100_100_000 + index).padStart(14, '0'),
        kind === 'cement' ? null : systemId,
        supplier,
        kind === 'cement' ? 'sterile' : 'implant',
        kind,
        { head: 'Humeral head', femur: 'Femur', cement: 'Bone cement' }[kind],
        `${kind} ${size}`,
        size,
        parseInt(size, 10),
        variant,
        kind === 'head' ? Number(size) : null,
        null,
        side,
      ],
    )
  }

  async function aCase(options: CaseOptions = {}): Promise<string> {
    const id = randomUUID()
    const startsAt = options.startsAt ?? `${api.clock.today()}T10:30:00Z`
    const status = options.status ?? 'planned'
    await api.rows(
      `INSERT INTO surgical_case (id, case_number, room_id, starts_at, status, procedure_kind, procedure_label, side,
         surgeon_id, started_at)
       VALUES ($1, $2, $3, $4, $5, 'shoulder', 'Shoulder, anatomic total', $6, $7, $8)`,
      [
        id,
        id.slice(0, 8),
        options.room === 1 ? room2 : room1,
        startsAt,
        status,
        options.side ?? 'left',
        surgeonId,
        status === 'inProgress' ? startsAt : null,
      ],
    )
    for (const person of [surgeonId, ...(options.team ?? [])])
      await api.rows('INSERT INTO case_member (case_id, person_id) VALUES ($1, $2)', [id, person])
    await api.rows(
      `INSERT INTO case_plan_line (case_id, line_no, kind, system_id, variant, planned, size_from, size_to)
       VALUES ($1, 1, 'head', $2, 'concentric', '50', '48', '52')`,
      [id, systemId],
    )
    return id
  }

  async function aUnit(ref: string, options: UnitOptions = {}): Promise<string> {
    const id = randomUUID()
    await api.rows(
      `INSERT INTO unit (id, catalogue_item_id, lot, use_by_on, state, held_for, location_id, home_location_id, sterile)
       VALUES ($1, $2, 'L1', $3, $4, $5, $6, $6, $7)`,
      [
        id,
        items[ref],
        options.useByOn ?? '2030-12-31',
        options.state ?? 'available',
        options.heldFor ?? null,
        options.at ?? core,
        options.sterile ?? true,
      ],
    )
    return id
  }

  const aCall: World['aCall'] = async (caseId, refs, ask = api.rows) => {
    const callId = randomUUID()
    const now = api.clock.now()
    await ask(
      `INSERT INTO call (id, case_id, room_id, kind, needed_at, called_at, called_by, entered_by, revision)
       SELECT $1, k.id, k.room_id, 'early', $3, $3, k.surgeon_id, k.surgeon_id, 1 FROM surgical_case k WHERE k.id = $2`,
      [callId, caseId, now],
    )
    const itemIds: string[] = []
    for (const [index, ref] of refs.entries()) {
      const id = randomUUID()
      await ask(
        `INSERT INTO item (id, call_id, line_no, catalogue_item_id, category, side, hold)
         SELECT $1, $2, $3, c.id, c.category, c.side, 'noneFree' FROM catalogue_item c WHERE c.id = $4`,
        [id, callId, index + 1, items[ref]],
      )
      itemIds.push(id)
    }
    return { callId, itemIds }
  }

  return { rooms: [room1, room2], core, roomCart, otherCart, systemId, items, aCase, aUnit, aCall }
}
