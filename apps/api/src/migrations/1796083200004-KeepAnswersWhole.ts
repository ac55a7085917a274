import type { MigrationInterface, QueryRunner } from 'typeorm'

/**
 * Answers are 2 to 4 kB and live for a day: packing each small enough to share its page with others cost more than
 * the room that it saved. Applies to rows that are written from now on.
 */
export class KeepAnswersWhole1796083200004 implements MigrationInterface {
  name = 'KeepAnswersWhole1796083200004'

  async up(db: QueryRunner): Promise<void> {
    await db.query('ALTER TABLE idempotency_key SET (toast_tuple_target = 8160)')
  }

  async down(db: QueryRunner): Promise<void> {
    await db.query('ALTER TABLE idempotency_key RESET (toast_tuple_target)')
  }
}
