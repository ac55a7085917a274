import { expect } from 'vitest'
import type { TestApi } from './app.js'

/** What must hold of the whole house at every moment, whatever has been done; each a query that finds what breaks it. */
const PROMISES: Readonly<Record<string, string>> = {
  'a package is kept for one open item at most': `
    SELECT unit_id FROM item WHERE unit_id IS NOT NULL AND outcome IS NULL GROUP BY unit_id HAVING count(*) > 1`,
  'an open item and its package know each other': `
    SELECT i.id FROM item i JOIN unit u ON u.id = i.unit_id WHERE i.outcome IS NULL AND u.held_for IS DISTINCT FROM i.id`,
  'a package is kept for an open item that has it': `
    SELECT u.id FROM unit u LEFT JOIN item i ON i.id = u.held_for
     WHERE u.held_for IS NOT NULL AND (i.unit_id IS DISTINCT FROM u.id OR i.outcome IS NOT NULL)`,
  'a package is in the state of its item': `
    SELECT u.id, u.state, i.stage FROM unit u JOIN item i ON i.id = u.held_for
     WHERE u.state NOT IN ('recalled', 'quarantined') AND u.state <>
       CASE i.stage WHEN 'called' THEN 'held' WHEN 'accepted' THEN 'held' WHEN 'verified' THEN 'inRoom' ELSE i.stage END`,
  'a settled package has the end of its item': `
    SELECT u.id FROM unit u JOIN item i ON i.unit_id = u.id
     WHERE i.outcome IN ('implanted', 'used', 'notImplanted') AND u.state <> i.outcome`,
  'a put-back is on its way, or was recalled': `
    SELECT u.id FROM unit u JOIN item i ON i.unit_id = u.id
     WHERE i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL AND i.outcome IS NOT NULL
       AND u.state NOT IN ('putBack', 'recalled', 'quarantined')`,
  'what is on its way back has a task': `
    SELECT u.id FROM unit u WHERE u.state = 'putBack' AND NOT EXISTS (SELECT 1 FROM item i WHERE i.unit_id = u.id
       AND i.outcome IS NOT NULL AND i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL)`,
  'what lies in a room was delivered there': `
    SELECT u.id FROM unit u JOIN item i ON i.id = u.held_for JOIN call c ON c.id = i.call_id
     WHERE u.state IN ('inRoom', 'opened') AND u.place_room_id IS DISTINCT FROM c.room_id`,
  'nothing is held in another room': `
    SELECT u.id FROM unit u JOIN item i ON i.id = u.held_for JOIN call c ON c.id = i.call_id
     WHERE u.place_room_id IS NOT NULL AND u.place_room_id <> c.room_id`,
  'a call is open while something of it is': `
    SELECT c.id FROM call c WHERE c.open <> EXISTS (SELECT 1 FROM item i WHERE i.call_id = c.id AND (i.outcome IS NULL
       OR i.put_back_to IS NOT NULL AND i.put_back_done_at IS NULL))`,
  'events of a room are numbered without a gap, up to its count': `
    SELECT r.id FROM room r WHERE (SELECT coalesce(array_agg(e.seq ORDER BY e.seq), '{}') FROM event e WHERE e.room_id = r.id)
       <> (SELECT coalesce(array_agg(n), '{}') FROM generate_series(1, r.event_seq) n)`,
  'times of a room never go back': `
    SELECT room_id, seq FROM (SELECT room_id, seq, at, lag(at) OVER (PARTITION BY room_id ORDER BY seq) AS before FROM event) e
     WHERE at < before`,
  'no call is newer than its room': `SELECT c.id FROM call c JOIN room r ON r.id = c.room_id WHERE c.revision > r.revision`,
  'no two calls of a room have one revision': `SELECT room_id FROM call GROUP BY room_id, revision HAVING count(*) > 1`,
  'only successes are kept under a key': `SELECT key FROM idempotency_key WHERE status NOT IN (200, 201)`,
}

/** @throws when something that the house promises does not hold, naming it. */
export async function expectPromisesKept(api: TestApi): Promise<void> {
  const broken: Record<string, unknown> = {}
  for (const [promise, query] of Object.entries(PROMISES)) {
    const found = await api.rows(query)
    if (found.length > 0) broken[promise] = found
  }
  expect(broken).toEqual({})
}

/** Deltas that were told: each room's revisions one by one, without a gap, from the revision given. */
export function expectGapless(
  deltas: readonly { roomId: string; revision: number }[],
  from: Record<string, number>,
): void {
  for (const roomId of new Set(deltas.map((delta) => delta.roomId))) {
    const told = deltas.filter((delta) => delta.roomId === roomId).map(({ revision }) => revision)
    const first = (from[roomId] ?? 0) + 1
    expect([...told].sort((a, b) => a - b)).toEqual(told.map((_, index) => first + index))
  }
}
