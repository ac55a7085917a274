import { randomUUID } from 'node:crypto'
import pg from 'pg'
import { afterAll, beforeAll, beforeEach, afterEach, describe, expect, test } from 'vitest'
import { freshDatabase, type FreshDatabase } from '../../test/database.js'

/** A small house: one room, one case, one call with one item whose package is held. */
const ID = Object.fromEntries(
  [
    'surgeon',
    'nurse',
    'room',
    'bin',
    'cart',
    'supplier',
    'head',
    'unit',
    'spare',
    'case',
    'call',
    'item',
    'other',
  ].map((name) => [name, randomUUID()]),
) as Record<string, string>

const HOUSE = `
  INSERT INTO person (id, email, name, initials, role) VALUES
    ('${ID['surgeon']}', 'surgeon@house.example', 'A Surgeon', 'AS', 'surgeon'),
    ('${ID['nurse']}', 'nurse@house.example', 'A Nurse', 'AN', 'circulator');
  INSERT INTO room (id, number) VALUES ('${ID['room']}', 1);
  INSERT INTO location (id, code, zone, room_id, walk_order) VALUES
    ('${ID['bin']}', 'A1', 'core', NULL, 10), ('${ID['cart']}', 'R1', 'room', '${ID['room']}', 0);
  INSERT INTO supplier (id, name, email) VALUES ('${ID['supplier']}', 'Maker', 'maker@house.example');
  INSERT INTO catalogue_item (id, ref, gtin, supplier_id, category, kind, part_name, label, size_order, side)
    VALUES ('${ID['head']}', 'HD', '09521100100489', '${ID['supplier']}', 'implant', 'head', 'Head', 'Head 48', 48, 'either');
  INSERT INTO unit (id, catalogue_item_id, lot, serial, use_by_on, state, location_id, home_location_id) VALUES
    ('${ID['unit']}', '${ID['head']}', 'L1', '1', '2030-01-01', 'available', '${ID['bin']}', '${ID['bin']}'),
    ('${ID['spare']}', '${ID['head']}', 'L1', '2', '2030-01-01', 'available', '${ID['bin']}', '${ID['bin']}');
  INSERT INTO surgical_case (id, case_number, room_id, starts_at, status, procedure_kind, procedure_label, side, surgeon_id)
    VALUES ('${ID['case']}', '1', '${ID['room']}', now(), 'planned', 'shoulder', 'Shoulder', 'left', '${ID['surgeon']}');
  INSERT INTO call (id, case_id, room_id, kind, needed_at, called_at, called_by, entered_by, revision)
    VALUES ('${ID['call']}', '${ID['case']}', '${ID['room']}', 'early', now(), now(), '${ID['surgeon']}', '${ID['nurse']}', 1);
  INSERT INTO item (id, call_id, line_no, catalogue_item_id, category, side, hold, unit_id) VALUES
    ('${ID['item']}', '${ID['call']}', 1, '${ID['head']}', 'implant', 'either', 'held', '${ID['unit']}'),
    ('${ID['other']}', '${ID['call']}', 2, '${ID['head']}', 'implant', 'either', 'noneFree', NULL);
  UPDATE unit SET state = 'held', held_for = '${ID['item']}' WHERE id = '${ID['unit']}';
  INSERT INTO event (room_id, seq, type, at, case_id, actor_id)
    VALUES ('${ID['room']}', 1, 'call.called', now(), '${ID['case']}', '${ID['surgeon']}');
  INSERT INTO movement (unit_id, at, actor_id, why, to_location_id, to_state)
    VALUES ('${ID['unit']}', now(), '${ID['nurse']}', 'received', '${ID['bin']}', 'available');`

let database: FreshDatabase
let client: pg.Client

beforeAll(async () => {
  database = await freshDatabase()
  client = new pg.Client({ connectionString: database.url })
  await client.connect()
  await client.query(HOUSE)
})
afterAll(async () => {
  await client?.end()
  await database?.drop()
})
beforeEach(() => client.query('BEGIN'))
afterEach(() => client.query('ROLLBACK'))

const item = (set: string): string => `UPDATE item SET ${set} WHERE id = '${ID['item']}'`
const unit = (set: string, which = 'unit'): string => `UPDATE unit SET ${set} WHERE id = '${ID[which]}'`
const call = (set: string): string => `UPDATE call SET ${set} WHERE id = '${ID['call']}'`
const kase = (set: string): string => `UPDATE surgical_case SET ${set} WHERE id = '${ID['case']}'`

/** An item's columns as it stands at a stage, with the times of the way there. */
const WAY = `accepted_by = '${ID['nurse']}', accepted_at = now()`
const brought = `stage = 'opened', ${WAY}, pulled_at = now(), in_room_at = now(), opened_at = now()`
const opened = `${brought}, verified_at = now()`

describe('what the database allows', () => {
  test.each([
    ['an item accepted by somebody', item(`stage = 'accepted', ${WAY}`)],
    ['an opened item that was verified', item(opened)],
    ['an opened item that was not verified, and says so', item(`${brought}, opened_unverified = true`)],
    [
      'a verified item that stood in the room before it was ever in the hatch',
      item(`stage = 'inRoom', ${WAY}, in_room_at = now()`),
    ],
    ['an implanted item', item(`${opened}, outcome = 'implanted', settled_at = now()`)],
    [
      'a cancelled item that has let go of its package',
      item(`outcome = 'cancelled', settled_at = now(), unit_id = NULL`),
    ],
    ['a recalled package that is still held', unit(`state = 'recalled'`)],
    ['a call on stand by without a time', call(`kind = 'standby', needed_at = NULL`)],
    [
      'free text as used from the room',
      `INSERT INTO item (id, call_id, line_no, text, category, side, hold, stage, outcome, accepted_by, accepted_at, in_room_at, settled_at)
       VALUES (gen_random_uuid(), '${ID['call']}', 3, 'Step', 'other', 'either', 'notStocked', 'inRoom', 'used', '${ID['nurse']}', now(), now(), now())`,
    ],
  ])('%s', async (_, sql) => {
    expect((await client.query(sql)).rowCount).toBe(1)
  })
})

describe('what the database refuses, by the name of its promise', () => {
  test.each([
    [
      'unit_held_once',
      'a second package for one item',
      unit(`state = 'held', held_for = '${ID['item']}'`, 'spare'),
    ],
    [
      'item_unit_one_open',
      'one package for two open items',
      `UPDATE item SET hold = 'held', unit_id = '${ID['unit']}' WHERE id = '${ID['other']}'`,
    ],
    ['unit_hold_has_item', 'a held package without an item', unit('held_for = NULL')],
    ['unit_hold_has_item', 'an item on a package that is free', unit(`state = 'available'`)],
    ['unit_hold_has_item', 'an implanted package that is still held', unit(`state = 'implanted'`)],
    ['unit_state_known', 'a state that nobody knows', unit(`state = 'lost', held_for = NULL`)],
    ['unit_serial_once', 'one serial received twice', unit(`serial = '1'`, 'spare')],
    [
      'location_in_room',
      'a place in a room outside every room',
      `UPDATE location SET room_id = NULL WHERE id = '${ID['cart']}'`,
    ],
    [
      'catalogue_item_gtin_14',
      'a GTIN of thirteen digits',
      `UPDATE catalogue_item SET gtin = '9521100100489'`,
    ],
    [
      'person_email_lower',
      'an address in capitals',
      `UPDATE person SET email = 'Nurse@house.example' WHERE id = '${ID['nurse']}'`,
    ],
    ['surgical_case_closed_has_time', 'a closed case without its time', kase(`status = 'closed'`)],
    ['surgical_case_started_has_time', 'a case in progress that never began', kase(`status = 'inProgress'`)],
    ['call_standby_has_no_time', 'a time on stand by', call(`kind = 'standby'`)],
    ['call_standby_has_no_time', 'an early call without a time', call('needed_at = NULL')],
    ['call_confirmed_has_time', 'confirmed without a moment', call(`kind = 'confirmed'`)],
    ['call_read_back_whole', 'read back by somebody, at no time', call(`read_back_by = '${ID['nurse']}'`)],
    [
      'call_read_back_by_another',
      'read back by the one who called',
      call(`read_back_by = '${ID['surgeon']}', read_back_at = now()`),
    ],
    ['item_line_once', 'two items on one line', `UPDATE item SET line_no = 1`],
    ['item_is_something', 'an item that is nothing', item('catalogue_item_id = NULL')],
    ['item_is_something', 'a product and words at once', item(`text = 'Step'`)],
    ['item_text_short', '61 characters', item(`catalogue_item_id = NULL, text = repeat('x', 61)`)],
    ['item_hold_has_unit', 'held, but no package', item('unit_id = NULL')],
    ['item_hold_has_unit', 'none free, but a package', item(`hold = 'noneFree'`)],
    [
      'item_none_free_goes_nowhere',
      'accepted with none free',
      item(`hold = 'noneFree', unit_id = NULL, stage = 'accepted', ${WAY}`),
    ],
    ['item_accepted_by_somebody', 'accepted by nobody', item(`stage = 'accepted', accepted_at = now()`)],
    ['item_accepted_by_somebody', 'called, yet accepted', item(WAY)],
    [
      'item_stage_has_time',
      'accepted at no time',
      item(`stage = 'accepted', accepted_by = '${ID['nurse']}'`),
    ],
    ['item_stage_has_time', 'pulled at no time', item(`stage = 'pulled', ${WAY}`)],
    ['item_stage_has_time', 'in the room at no time', item(`stage = 'inRoom', ${WAY}`)],
    ['item_stage_has_time', 'verified at no time', item(`stage = 'verified', ${WAY}, in_room_at = now()`)],
    ['item_stage_has_time', 'opened, not verified, and not saying so', item(brought)],
    ['item_outcome_has_time', 'an outcome at no time', item(`outcome = 'cancelled'`)],
    ['item_outcome_has_time', 'settled without an outcome', item('settled_at = now()')],
    [
      'item_outcome_fits_stage',
      'implanted from the shelf',
      item(`outcome = 'implanted', settled_at = now()`),
    ],
    [
      'item_outcome_fits_stage',
      'not implanted, but never opened',
      item(`outcome = 'notImplanted', settled_at = now()`),
    ],
    ['item_outcome_fits_stage', 'used in its package', item(`outcome = 'used', settled_at = now()`)],
    [
      'item_outcome_fits_stage',
      'put back without having left',
      item(`outcome = 'returned', settled_at = now()`),
    ],
    [
      'item_outcome_fits_stage',
      'put back after opening',
      item(`${opened}, outcome = 'returned', settled_at = now()`),
    ],
    [
      'item_outcome_fits_stage',
      'cancelled after opening',
      item(`${opened}, outcome = 'cancelled', settled_at = now()`),
    ],
    ['item_put_back_whole', 'a put-back to a bin since never', item(`put_back_to = '${ID['bin']}'`)],
    ['item_version_positive', 'version 0', item('version = 0')],
    ['call_version_positive', 'version 0', call('version = 0')],
    ['surgical_case_version_positive', 'version 0', kase('version = 0')],
  ])('%s: %s', async (constraint, _, sql) => {
    await expect(client.query(sql)).rejects.toMatchObject({ constraint })
  })
})

describe('the log and the movements are append-only', () => {
  test.each(['event', 'movement'])('%s takes another row', async (table) => {
    const again =
      table === 'event'
        ? `INSERT INTO event SELECT room_id, 2, type, at, case_id, call_id, item_id, actor_id, data FROM event`
        : `INSERT INTO movement (unit_id, at, actor_id, why, to_location_id, to_state)
             SELECT unit_id, at, actor_id, why, to_location_id, to_state FROM movement`
    expect((await client.query(again)).rowCount).toBe(1)
  })

  test.each(
    ['event', 'movement'].flatMap((table) =>
      [`UPDATE ${table} SET at = now()`, `DELETE FROM ${table}`, `TRUNCATE ${table}`].map((sql) => [sql]),
    ),
  )('%s is refused, to the owner of the table too', async (sql) => {
    await expect(client.query(sql)).rejects.toMatchObject({ code: '23001', message: /append-only/ })
  })
})

describe('copies on a package that the holding statement sorts by', () => {
  test.each([
    [
      'its place moves into a room',
      `location_id = '${ID['cart']}'`,
      { place_room_id: ID['room'], walk_order: 0, owner_rank: 0 },
    ],
    ['it becomes consigned', `owner = 'consigned'`, { place_room_id: null, walk_order: 10, owner_rank: 1 }],
    ['it becomes a loan', `owner = 'loaner'`, { place_room_id: null, walk_order: 10, owner_rank: 2 }],
    [
      'somebody writes them by hand with its place',
      `location_id = '${ID['bin']}', walk_order = 99, owner_rank = 9`,
      { place_room_id: null, walk_order: 10, owner_rank: 0 },
    ],
  ])('are true when %s', async (_, set, expected) => {
    await client.query(unit(set, 'spare'))
    const { rows } = await client.query(
      `SELECT place_room_id, walk_order, owner_rank FROM unit WHERE id = '${ID['spare']}'`,
    )
    expect(rows).toEqual([expected])
  })
})
