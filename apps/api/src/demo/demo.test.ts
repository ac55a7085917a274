import bcrypt from 'bcryptjs'
import type { DataSource } from 'typeorm'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { freshDatabase, type FreshDatabase } from '../../test/database.js'
import { createDataSource } from '../data-source.js'
import { fillHouse, gatherStatistics } from './demo.js'

/** The moment of loading; $now in the queries, with $today its day. */
const NOW = new Date('2026-12-01T16:00:00Z')
const TODAY = '2026-12-01'

let database: FreshDatabase
let dataSource: DataSource

const ask = <T = Record<string, unknown>>(sql: string): Promise<T[]> =>
  dataSource.query<T[]>(
    sql.replaceAll('$now', `'${NOW.toISOString()}'::timestamptz`).replaceAll('$today', `'${TODAY}'::date`),
  )

beforeAll(async () => {
  database = await freshDatabase()
  dataSource = await createDataSource({ url: database.url, poolSize: 2 }).initialize()
  await fillHouse(dataSource, NOW, 'UTC')
  await gatherStatistics(dataSource)
}, 120_000)

afterAll(async () => {
  await dataSource?.destroy()
  await database?.drop()
})

describe('loading', () => {
  test('a house in which somebody lives is left alone', async () => {
    const before = await ask('SELECT count(*) FROM event')
    expect(await fillHouse(dataSource, NOW, 'UTC')).toBeNull()
    expect(await ask('SELECT count(*) FROM event')).toEqual(before)
  })
})

describe('rules that hold over everything that was told (each question finds nobody)', () => {
  const held = `u.state IN ('held', 'pulled', 'inRoom', 'opened')`
  test.each([
    [
      'a package held for an item that does not know it, or the other way round',
      `SELECT u.id FROM unit u FULL JOIN item i ON i.id = u.held_for WHERE u.held_for IS NOT NULL AND (i.unit_id <> u.id OR i.outcome IS NOT NULL) UNION ALL SELECT i.id FROM item i JOIN unit u ON u.id = i.unit_id WHERE i.outcome IS NULL AND u.held_for IS DISTINCT FROM i.id`,
    ],
    [
      'a held package whose state is not its item’s stage',
      `SELECT 1 FROM unit u JOIN item i ON i.id = u.held_for WHERE u.state <> CASE i.stage WHEN 'called' THEN 'held' WHEN 'accepted' THEN 'held' WHEN 'verified' THEN 'inRoom' ELSE i.stage END`,
    ],
    [
      'a package that ended otherwise than its item',
      `SELECT 1 FROM item i JOIN unit u ON u.id = i.unit_id WHERE i.outcome IN ('implanted', 'used', 'notImplanted') AND u.state <> i.outcome`,
    ],
    [
      'a package that was used for two items',
      `SELECT unit_id FROM item WHERE outcome IN ('implanted', 'used', 'notImplanted') AND unit_id IS NOT NULL GROUP BY 1 HAVING count(*) > 1`,
    ],
    [
      'a package kept for two items at one time',
      `WITH again AS (SELECT item_id, max(at) AS at FROM event WHERE type = 'item.heldAgain' GROUP BY 1),
            kept AS (SELECT i.unit_id, coalesce(again.at, before.settled_at, c.called_at) AS since,
                            coalesce(i.put_back_done_at, i.settled_at, 'infinity') AS until
                       FROM item i JOIN call c ON c.id = i.call_id LEFT JOIN again ON again.item_id = i.id
                       LEFT JOIN item before ON before.id = i.replaces_item_id WHERE i.unit_id IS NOT NULL)
       SELECT 1 FROM (SELECT since, lag(until) OVER (PARTITION BY unit_id ORDER BY since) AS was FROM kept) k
        WHERE since < was`,
    ],
    [
      'a package used after its date',
      `SELECT 1 FROM item i JOIN unit u ON u.id = i.unit_id WHERE u.use_by_on < i.opened_at::date`,
    ],
    [
      'a package held before it came in',
      `SELECT 1 FROM item i JOIN unit u ON u.id = i.unit_id JOIN call c ON c.id = i.call_id WHERE u.received_at > coalesce(i.accepted_at, c.called_at)`,
    ],
    [
      'a package of the wrong side',
      `SELECT 1 FROM item i JOIN call c ON c.id = i.call_id JOIN surgical_case k ON k.id = c.case_id WHERE i.side <> 'either' AND i.side <> k.side`,
    ],
    [
      'a package that lies elsewhere than its last movement says',
      `SELECT 1 FROM unit u JOIN LATERAL (SELECT to_location_id FROM movement m WHERE m.unit_id = u.id ORDER BY at DESC, id DESC LIMIT 1) m ON true WHERE m.to_location_id <> u.location_id`,
    ],
    [
      'a movement that begins elsewhere than the one before ended',
      `SELECT 1 FROM (SELECT from_location_id, lag(to_location_id) OVER (PARTITION BY unit_id ORDER BY at, id) AS was, row_number() OVER (PARTITION BY unit_id ORDER BY at, id) AS n FROM movement) m WHERE n > 1 AND from_location_id IS DISTINCT FROM was`,
    ],
    [
      'a package in a room that is not its item’s',
      `SELECT 1 FROM unit u JOIN item i ON i.id = u.held_for JOIN call c ON c.id = i.call_id WHERE u.state IN ('inRoom', 'opened') AND u.place_room_id IS DISTINCT FROM c.room_id`,
    ],
    [
      'a gap in the events of a room',
      `SELECT r.id FROM room r JOIN event e ON e.room_id = r.id GROUP BY r.id HAVING count(*) <> r.event_seq OR max(e.seq) <> r.event_seq OR min(e.seq) <> 1 OR max(e.at) <> r.last_event_at`,
    ],
    [
      'an event that is told before an earlier one',
      `SELECT 1 FROM (SELECT at, lag(at) OVER (PARTITION BY room_id ORDER BY seq) AS was FROM event) e WHERE at < was`,
    ],
    [
      'a room whose revision is not the sum of its calls’ changes',
      `SELECT r.id FROM room r JOIN call c ON c.room_id = r.id GROUP BY r.id HAVING sum(c.version) <> r.revision OR max(c.revision) <> r.revision OR count(DISTINCT c.revision) <> count(*)`,
    ],
    [
      'a call that is open with nothing to do, or closed with something',
      `SELECT 1 FROM call c WHERE c.open <> EXISTS (SELECT 1 FROM item i WHERE i.call_id = c.id AND (i.outcome IS NULL OR (i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL)))`,
    ],
    [
      'a call by somebody who may not call for the case',
      `SELECT 1 FROM call c JOIN person p ON p.id = c.called_by WHERE p.role <> 'surgeon' AND NOT (p.role = 'scrub' AND EXISTS (SELECT 1 FROM case_member m WHERE m.case_id = c.case_id AND m.person_id = p.id))`,
    ],
    [
      'a team that is not surgeon, scrub and circulator',
      `SELECT k.id FROM surgical_case k JOIN case_member m ON m.case_id = k.id JOIN person p ON p.id = m.person_id GROUP BY k.id HAVING array_agg(p.role ORDER BY p.role) <> '{circulator,scrub,surgeon}' OR NOT bool_or(p.id = k.surgeon_id)`,
    ],
    [
      'an implant verified by one person, or by one person twice',
      `SELECT 1 FROM item i JOIN event e ON e.item_id = i.id AND e.type = 'item.verified' WHERE i.category = 'implant' AND i.verified_at IS NOT NULL AND (i.checked_by IS NULL OR i.checked_by = e.actor_id)`,
    ],
    [
      'something verified before its call was read back',
      `SELECT 1 FROM item i JOIN call c ON c.id = i.call_id WHERE i.verified_at IS NOT NULL AND (c.read_back_at IS NULL OR c.read_back_at > i.verified_at)`,
    ],
    [
      'something opened more than 15 minutes after it was verified',
      `SELECT 1 FROM item WHERE opened_at - verified_at > interval '15 minutes'`,
    ],
    [
      'times that run backwards',
      `SELECT 1 FROM item i JOIN call c ON c.id = i.call_id WHERE i.replaces_item_id IS NULL AND c.called_at > i.accepted_at OR accepted_at > pulled_at OR pulled_at > in_room_at OR accepted_at > in_room_at OR in_room_at > verified_at OR verified_at > opened_at OR opened_at > settled_at OR put_back_since > put_back_done_at`,
    ],
    [
      'an item whose times are not those of its events',
      `SELECT 1 FROM item i JOIN event e ON e.item_id = i.id WHERE (e.type = 'item.opened' AND e.at <> i.opened_at) OR (e.type IN ('item.implanted', 'item.used', 'item.notImplanted', 'item.returned', 'item.cancelled', 'item.changed') AND e.at IS DISTINCT FROM i.settled_at)`,
    ],
    [
      'an item that stands at an end without an event of it',
      `SELECT 1 FROM item i WHERE i.outcome IS NOT NULL AND NOT EXISTS (SELECT 1 FROM event e WHERE e.item_id = i.id AND e.type = 'item.' || i.outcome)`,
    ],
    [
      'a closed case with something unsettled',
      `SELECT 1 FROM surgical_case k JOIN call c ON c.case_id = k.id JOIN item i ON i.call_id = c.id WHERE k.status IN ('closed', 'cancelled') AND i.outcome IS NULL`,
    ],
    [
      'anything that has happened after now',
      `SELECT 1 FROM event WHERE at > $now UNION ALL SELECT 1 FROM call WHERE called_at > $now UNION ALL SELECT 1 FROM movement WHERE at > $now UNION ALL SELECT 1 FROM unit WHERE received_at > $now`,
    ],
    [
      'a held package that may not be used today',
      `SELECT 1 FROM unit u WHERE ${held} AND (NOT sterile OR use_by_on < $today)`,
    ],
    [
      'a package without lot or date, an implant without a serial',
      `SELECT 1 FROM unit u JOIN catalogue_item ci ON ci.id = u.catalogue_item_id WHERE u.lot = '' OR (ci.category = 'implant' AND u.serial IS NULL)`,
    ],
  ])('%s', async (_, sql) => {
    expect((await ask(sql)).slice(0, 3)).toEqual([])
  })
})

describe('what the demo promises', () => {
  test('everybody signs in with the one password and a PIN of their own', async () => {
    const people = await ask<{ email: string; role: string; password_hash: string; pin_hash: string }>(
      'SELECT email, role, password_hash, pin_hash FROM person ORDER BY email',
    )
    expect(people).toHaveLength(14)
    const juniper = people.find(({ email }) => email === 'juniper@larchwater.example')
    expect(juniper?.role).toBe('surgeon')
    expect(await bcrypt.compare('linen-brass-cord', juniper?.password_hash ?? '')).toBe(true)
    expect(await bcrypt.compare('1301', juniper?.pin_hash ?? '')).toBe(true)
    expect(new Set(people.map(({ pin_hash }) => pin_hash)).size).toBe(14)
  })

  test('cases in all eight rooms; 0412-1 is closed, 0412-5 in room 6 and 0412-6 in room 2 are open', async () => {
    const cases = await ask<{ number: number; case_number: string; status: string }>(
      `SELECT r.number, k.case_number, k.status FROM surgical_case k JOIN room r ON r.id = k.room_id
        WHERE k.starts_at::date = $today ORDER BY k.starts_at, k.case_number`,
    )
    expect(new Set(cases.map(({ number }) => number))).toEqual(new Set([1, 2, 3, 4, 5, 6, 7, 8]))
    expect(cases.every(({ case_number }) => case_number.startsWith('0412-'))).toBe(true)
    const of = (number: string) => cases.find(({ case_number }) => case_number === number)
    expect(of('0412-1')).toMatchObject({ status: 'closed', number: 2 })
    expect(of('0412-5')).toMatchObject({ status: 'inProgress', number: 6 })
    expect(of('0412-6')).toMatchObject({ status: 'inProgress', number: 2 })
    const busy = cases.filter(({ status }) => status === 'inProgress').map(({ number }) => number)
    expect(busy.sort()).toEqual([1, 2, 3, 4, 5, 6, 7, 8])
  })

  test('both knees of one morning are two linked cases', async () => {
    expect(
      await ask(`SELECT k.case_number, k.side, o.case_number AS linked FROM surgical_case k
                   JOIN surgical_case o ON o.id = k.linked_case_id ORDER BY 2`),
    ).toEqual([
      { case_number: '0412-3', side: 'left', linked: '0412-10' },
      { case_number: '0412-10', side: 'right', linked: '0412-3' },
    ])
  })

  test('900 packages or more may be used', async () => {
    const [found] = await ask<{ n: number }>(
      `SELECT count(*)::int AS n FROM unit WHERE state = 'available' AND sterile AND use_by_on >= $today`,
    )
    expect(found?.n).toBeGreaterThanOrEqual(900)
  })

  test.each(['head', 'stem'])(
    'at least three %s sizes of the shoulder have 2 to 6 in the core, none elsewhere for stems',
    async (kind) => {
      const rows = await ask<{ core: number; elsewhere: number }>(
        `SELECT count(*) FILTER (WHERE u.state = 'available' AND u.sterile AND u.use_by_on >= $today AND u.place_room_id IS NULL)::int AS core,
              count(*) FILTER (WHERE u.held_for IS NOT NULL OR (u.state = 'available' AND u.place_room_id IS NOT NULL))::int AS elsewhere
         FROM catalogue_item ci JOIN implant_system s ON s.id = ci.system_id LEFT JOIN unit u ON u.catalogue_item_id = ci.id
        WHERE s.name = 'Sallowby' AND ci.kind = '${kind}' GROUP BY ci.id`,
      )
      const fit = rows.filter(({ core, elsewhere }) => core >= 2 && core <= 6 && elsewhere === 0)
      expect(fit.length).toBeGreaterThanOrEqual(3)
    },
  )

  test('200 items or more were finished in the last 30 days', async () => {
    const [found] = await ask<{ n: number }>(
      `SELECT count(*)::int AS n FROM item WHERE outcome IN ('implanted', 'used') AND settled_at > $now - interval '30 days'`,
    )
    expect(found?.n).toBeGreaterThanOrEqual(200)
  })

  test('the quiet run: verified at 08:39 of the story, implanted', async () => {
    const minute = (clock: number) => new Date(NOW.getTime() + clock * 60_000)
    expect(
      await ask(`SELECT ci.ref, c.called_at, i.outcome FROM item i JOIN call c ON c.id = i.call_id JOIN surgical_case k ON k.id = c.case_id
                   JOIN catalogue_item ci ON ci.id = i.catalogue_item_id
                  WHERE k.case_number = '0412-1' AND ci.kind IN ('head', 'stem') ORDER BY c.called_at`),
    ).toEqual([
      { ref: 'SLB-HD-50C', called_at: minute(-173), outcome: 'implanted' },
      { ref: 'SLB-ST-09', called_at: minute(-161), outcome: 'implanted' },
    ])
  })

  test.each([
    [
      'one eccentric head 48, free in the core',
      `ci.ref = 'SLB-HD-48E' AND u.state = 'available' AND u.place_room_id IS NULL`,
      1,
    ],
    [
      'one high offset stem 7 on its last day',
      `ci.ref = 'WTH-ST-07-H' AND u.state = 'available' AND u.use_by_on = $today`,
      1,
    ],
    [
      'one insert of the lot to be recalled is implanted',
      `u.lot = 'L26A020' AND ci.ref LIKE 'DNK-IN-%' AND u.state = 'implanted'`,
      1,
    ],
    [
      'one insert of that lot is held',
      `u.lot = 'L26A020' AND ci.ref LIKE 'DNK-IN-%' AND u.state = 'held'`,
      1,
    ],
    ['one wet tray', `ci.ref = 'DNK-T2' AND NOT u.sterile AND u.state = 'quarantined'`, 1],
    ['one torn shell 54', `ci.ref = 'CBN-SH-54' AND u.state = 'quarantined' AND u.note LIKE 'torn%'`, 1],
    ['no extraction tray: the loan has not come', `ci.ref = 'EXP-1'`, 0],
    ['a loaner tray that carries packages', `u.carried_by IS NOT NULL AND u.owner = 'loaner'`, 6],
    [
      'the label that is printed as a sample',
      `ci.gtin = '09521100100489' AND u.lot = 'L26A014' AND u.serial = '000731' AND u.use_by_on = '2028-11-30'`,
      1,
    ],
  ])('%s', async (_, where, count) => {
    const rows = await ask(
      `SELECT u.id FROM unit u JOIN catalogue_item ci ON ci.id = u.catalogue_item_id WHERE ${where}`,
    )
    expect(rows).toHaveLength(count)
  })

  test.each([
    ['waits to be accepted', `i.stage = 'called' AND i.hold = 'held'`],
    ['waits to be read back', `c.read_back_at IS NULL AND i.outcome IS NULL`],
    ['is to be pulled', `i.stage = 'accepted' AND i.hold = 'held' AND i.outcome IS NULL`],
    ['lies in the hatch', `u.state = 'pulled' AND l.zone = 'hatch'`],
    [
      'is in the room, to be verified',
      `i.stage = 'inRoom' AND i.category = 'implant' AND c.read_back_at IS NOT NULL AND i.outcome IS NULL`,
    ],
    [
      'is verified, to be opened',
      `i.stage = 'verified' AND i.outcome IS NULL AND i.verified_at > $now - interval '15 minutes'`,
    ],
    ['is open on the table', `i.stage = 'opened' AND i.category = 'implant' AND i.outcome IS NULL`],
    ['is to be put back', `i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL AND u.state = 'putBack'`],
    [
      'has none free while another room holds one',
      `i.hold = 'noneFree' AND i.outcome IS NULL AND EXISTS (SELECT 1 FROM unit o JOIN item oi ON oi.id = o.held_for JOIN call oc ON oc.id = oi.call_id WHERE o.catalogue_item_id = i.catalogue_item_id AND oc.room_id <> c.room_id AND o.state <> 'opened')`,
    ],
  ])('something %s', async (_, where) => {
    const rows = await ask(
      `SELECT 1 FROM item i JOIN call c ON c.id = i.call_id LEFT JOIN unit u ON u.id = i.unit_id LEFT JOIN location l ON l.id = u.location_id WHERE c.open AND ${where}`,
    )
    expect(rows.length).toBeGreaterThan(0)
  })
})
