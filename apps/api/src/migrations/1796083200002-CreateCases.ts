import type { MigrationInterface, QueryRunner } from 'typeorm'

export class CreateCases1796083200002 implements MigrationInterface {
  name = 'CreateCases1796083200002'

  async up(db: QueryRunner): Promise<void> {
    await db.query(`
      CREATE TABLE surgical_case (
        id              uuid PRIMARY KEY,
        case_number     text NOT NULL CONSTRAINT surgical_case_number_once UNIQUE,
        room_id         uuid NOT NULL,
        starts_at       timestamptz NOT NULL,
        status          text NOT NULL,
        procedure_kind  text NOT NULL,
        procedure_label text NOT NULL,
        side            text NOT NULL,
        surgeon_id      uuid NOT NULL,
        linked_case_id  uuid,
        started_at      timestamptz,
        time_out_at     timestamptz,
        time_out_ended_at timestamptz,
        patient_out_at  timestamptz,
        closed_at       timestamptz,
        status_reason   text,
        version         integer NOT NULL DEFAULT 1,
        CONSTRAINT surgical_case_in_room FOREIGN KEY (room_id) REFERENCES room (id),
        CONSTRAINT surgical_case_of_surgeon FOREIGN KEY (surgeon_id) REFERENCES person (id),
        CONSTRAINT surgical_case_linked FOREIGN KEY (linked_case_id) REFERENCES surgical_case (id),
        CONSTRAINT surgical_case_status_known CHECK (status IN ('planned', 'inProgress', 'closed', 'cancelled')),
        CONSTRAINT surgical_case_side_known CHECK (side IN ('left', 'right')),
        CONSTRAINT surgical_case_closed_has_time CHECK ((status = 'closed') = (closed_at IS NOT NULL)),
        CONSTRAINT surgical_case_started_has_time CHECK (status <> 'inProgress' OR started_at IS NOT NULL),
        CONSTRAINT surgical_case_version_positive CHECK (version > 0)
      );
      CREATE INDEX surgical_case_by_day ON surgical_case (starts_at, room_id);

      CREATE TABLE case_member (
        case_id   uuid NOT NULL,
        person_id uuid NOT NULL,
        PRIMARY KEY (case_id, person_id),
        CONSTRAINT case_member_of_case FOREIGN KEY (case_id) REFERENCES surgical_case (id),
        CONSTRAINT case_member_person FOREIGN KEY (person_id) REFERENCES person (id)
      );
      CREATE INDEX case_member_by_person ON case_member (person_id);

      CREATE TABLE case_plan_line (
        case_id   uuid NOT NULL,
        line_no   smallint NOT NULL,
        kind      text NOT NULL,
        system_id uuid NOT NULL,
        variant   text,
        planned   text,
        size_from text,
        size_to   text,
        hint      text,
        PRIMARY KEY (case_id, line_no),
        CONSTRAINT case_plan_line_of_case FOREIGN KEY (case_id) REFERENCES surgical_case (id),
        CONSTRAINT case_plan_line_of_system FOREIGN KEY (system_id) REFERENCES implant_system (id)
      );
    `)
  }

  async down(db: QueryRunner): Promise<void> {
    await db.query(`DROP TABLE case_plan_line, case_member, surgical_case`)
  }
}
