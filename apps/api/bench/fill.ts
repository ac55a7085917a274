import { CALLERS, idSql, PRODUCTS, ROOMS, SURGEONS } from './world.js'

/** How a house is stocked. */
export interface Stock {
  readonly cases: number
  readonly unitsAProduct: number
  readonly products: number
  /** Finished calls of the year past. */
  readonly pastCalls: number
}

/** Fills a migrated house of the product. @returns statements to run in order. */
export function fillHouse({ cases, unitsAProduct, products }: Stock): string[] {
  return [
    `INSERT INTO room (id, number) SELECT ${idSql('room', 'n')}, n FROM generate_series(1, ${ROOMS}) n`,
    `INSERT INTO person (id, email, name, initials, role)
     SELECT ${idSql('person', 'n')}, 'p' || n || '@bench.example', 'Person ' || n, 'P' || n,
            CASE WHEN n <= ${SURGEONS} THEN 'surgeon' ELSE 'circulator' END
       FROM generate_series(1, ${SURGEONS + CALLERS}) n`,
    `INSERT INTO session (id, person_id, created_at, last_seen_at, expires_at)
     SELECT ${idSql('session', 'n')}, ${idSql('person', `n + ${SURGEONS}`)}, now(), now(), now() + interval '12 hours'
       FROM generate_series(1, ${CALLERS}) n`,
    `INSERT INTO location (id, code, zone, walk_order)
     SELECT ${idSql('location', 'n')}, 'B-' || n, 'core', n FROM generate_series(1, 40) n`,
    `INSERT INTO supplier (id, name, email) VALUES (${idSql('supplier', '1')}, 'Supplier', 'supplier@bench.example')`,
    `INSERT INTO implant_system (id, name, maker, supplier_id)
     VALUES (${idSql('system', '1')}, 'System', 'Maker', ${idSql('supplier', '1')})`,
    `INSERT INTO catalogue_item (id, ref, gtin, system_id, supplier_id, category, kind, part_name, label, size, size_order, side)
     SELECT ${idSql('product', 'n')}, 'R-' || n, lpad(n::text, 14, '0'), ${idSql('system', '1')}, ${idSql('supplier', '1')},
            'implant', k.kind, initcap(k.kind), initcap(k.kind) || ' ' || n, n::text, n, 'either'
       FROM generate_series(1, ${products}) n
      CROSS JOIN LATERAL (SELECT CASE n % 2 WHEN 1 THEN 'head' ELSE 'stem' END AS kind) k`,
    `INSERT INTO surgical_case (id, case_number, room_id, starts_at, started_at, status, procedure_kind, procedure_label, side, surgeon_id)
     SELECT ${idSql('case', 'n')}, 'C-' || n, ${idSql('room', `(n - 1) % ${ROOMS} + 1`)}, now(), now(), 'inProgress',
            'shoulder', 'Shoulder, anatomic total', 'left', ${idSql('person', `n % ${SURGEONS} + 1`)}
       FROM generate_series(1, ${cases}) n`,
    addUnits(unitsAProduct, products),
  ]
}

/** Receives so many packages of every product, use-by dates at random over two and a half years. */
export const addUnits = (perProduct: number, products = PRODUCTS): string => `
  INSERT INTO unit (id, catalogue_item_id, lot, serial, use_by_on, state, location_id, home_location_id)
  SELECT gen_random_uuid(), ${idSql('product', 'p')}, 'L' || u, left(gen_random_uuid()::text, 13),
         current_date + 60 + (random() * 900)::int, 'available', ${idSql('location', 'u % 40 + 1')}, ${idSql('location', 'u % 40 + 1')}
    FROM generate_series(1, ${perProduct}) u, generate_series(1, ${products}) p`
