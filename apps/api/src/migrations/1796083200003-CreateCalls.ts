import type { MigrationInterface, QueryRunner } from 'typeorm'

export class CreateCalls1796083200003 implements MigrationInterface {
  name = 'CreateCalls1796083200003'

  async up(db: QueryRunner): Promise<void> {
    await db.query(`
      CREATE TABLE call (
        id           uuid PRIMARY KEY,
        case_id      uuid NOT NULL,
        room_id      uuid NOT NULL,
        kind         text NOT NULL,
        needed_at    timestamptz,
        called_at    timestamptz NOT NULL,
        called_by    uuid NOT NULL,
        entered_by   uuid NOT NULL,
        read_back_by uuid,
        read_back_at timestamptz,
        confirmed_at timestamptz,
        -- Something is left to do: an item without outcome, or a package to put back.
        open         boolean NOT NULL DEFAULT true,
        -- Revision of the room at the last change of this call.
        revision     integer NOT NULL,
        version      integer NOT NULL DEFAULT 1,
        CONSTRAINT call_of_case FOREIGN KEY (case_id) REFERENCES surgical_case (id),
        CONSTRAINT call_in_room FOREIGN KEY (room_id) REFERENCES room (id),
        CONSTRAINT call_called_by FOREIGN KEY (called_by) REFERENCES person (id),
        CONSTRAINT call_entered_by FOREIGN KEY (entered_by) REFERENCES person (id),
        CONSTRAINT call_read_back_by FOREIGN KEY (read_back_by) REFERENCES person (id),
        CONSTRAINT call_kind_known CHECK (kind IN ('early', 'confirmed', 'standby')),
        CONSTRAINT call_standby_has_no_time CHECK ((kind = 'standby') = (needed_at IS NULL)),
        CONSTRAINT call_read_back_whole CHECK ((read_back_by IS NULL) = (read_back_at IS NULL)),
        CONSTRAINT call_read_back_by_another CHECK (read_back_by <> called_by),
        CONSTRAINT call_confirmed_has_time CHECK ((kind = 'confirmed') = (confirmed_at IS NOT NULL)),
        CONSTRAINT call_version_positive CHECK (version > 0)
      ) WITH (fillfactor = 80);
      CREATE INDEX call_open ON call (room_id) WHERE open;
      CREATE INDEX call_by_case ON call (case_id);

      CREATE TABLE item (
        id                uuid PRIMARY KEY,
        call_id           uuid NOT NULL,
        line_no           smallint NOT NULL,
        catalogue_item_id uuid,
        text              text,
        category          text NOT NULL,
        side              text NOT NULL,
        stage             text NOT NULL DEFAULT 'called',
        outcome           text,
        hold              text NOT NULL,
        unit_id           uuid,
        accepted_by       uuid,
        accepted_at       timestamptz,
        offered_to        uuid,
        pulled_at         timestamptz,
        in_room_at        timestamptz,
        verified_at       timestamptz,
        opened_at         timestamptz,
        settled_at        timestamptz,
        checked_by        uuid,
        second_check      text,
        opened_unverified boolean NOT NULL DEFAULT false,
        typed             boolean NOT NULL DEFAULT false,
        reason            text,
        put_back_to       uuid,
        put_back_since    timestamptz,
        put_back_inspect  boolean NOT NULL DEFAULT false,
        put_back_done_at  timestamptz,
        replaces_item_id  uuid,
        -- Who took the last step, when, and where the item stood before it: what undo takes back.
        last_step         jsonb,
        version           integer NOT NULL DEFAULT 1,
        CONSTRAINT item_of_call FOREIGN KEY (call_id) REFERENCES call (id),
        CONSTRAINT item_of_catalogue FOREIGN KEY (catalogue_item_id) REFERENCES catalogue_item (id),
        CONSTRAINT item_has_unit FOREIGN KEY (unit_id) REFERENCES unit (id),
        CONSTRAINT item_accepted_by FOREIGN KEY (accepted_by) REFERENCES person (id),
        CONSTRAINT item_offered_to FOREIGN KEY (offered_to) REFERENCES person (id),
        CONSTRAINT item_checked_by FOREIGN KEY (checked_by) REFERENCES person (id),
        CONSTRAINT item_put_back_to FOREIGN KEY (put_back_to) REFERENCES location (id),
        CONSTRAINT item_replaces FOREIGN KEY (replaces_item_id) REFERENCES item (id),
        CONSTRAINT item_line_once UNIQUE (call_id, line_no),
        CONSTRAINT item_category_known CHECK (category IN ('implant', 'sterile', 'tray', 'other')),
        CONSTRAINT item_side_known CHECK (side IN ('left', 'right', 'either')),
        CONSTRAINT item_stage_known CHECK (stage IN
          ('called', 'accepted', 'pulled', 'inRoom', 'verified', 'opened')),
        CONSTRAINT item_outcome_known CHECK (outcome IN
          ('implanted', 'used', 'notImplanted', 'returned', 'changed', 'cancelled', 'enteredInError')),
        CONSTRAINT item_hold_known CHECK (hold IN ('held', 'noneFree', 'notStocked')),
        CONSTRAINT item_is_something CHECK ((catalogue_item_id IS NULL) = (text IS NOT NULL)),
        CONSTRAINT item_text_short CHECK (char_length(text) <= 60),
        CONSTRAINT item_hold_has_unit CHECK (outcome IS NOT NULL OR (hold = 'held') = (unit_id IS NOT NULL)),
        CONSTRAINT item_none_free_goes_nowhere CHECK (hold <> 'noneFree' OR stage = 'called'),
        CONSTRAINT item_accepted_by_somebody CHECK ((stage = 'called') = (accepted_by IS NULL)),
        CONSTRAINT item_stage_has_time CHECK (
          (stage NOT IN ('accepted', 'pulled', 'inRoom', 'verified', 'opened') OR accepted_at IS NOT NULL) AND
          (stage <> 'pulled' OR pulled_at IS NOT NULL) AND
          (stage NOT IN ('inRoom', 'verified', 'opened') OR in_room_at IS NOT NULL) AND
          (stage <> 'verified' OR verified_at IS NOT NULL) AND
          (stage <> 'opened' OR (opened_at IS NOT NULL AND (verified_at IS NOT NULL OR opened_unverified)))),
        CONSTRAINT item_outcome_has_time CHECK ((outcome IS NULL) = (settled_at IS NULL)),
        CONSTRAINT item_outcome_fits_stage CHECK (
          (outcome NOT IN ('implanted', 'notImplanted') OR stage = 'opened') AND
          (outcome <> 'used' OR stage = 'opened' OR (category = 'other' AND stage = 'inRoom')) AND
          (outcome <> 'returned' OR stage IN ('pulled', 'inRoom', 'verified')) AND
          (outcome <> 'cancelled' OR stage <> 'opened')),
        CONSTRAINT item_put_back_whole CHECK ((put_back_to IS NULL) = (put_back_since IS NULL)),
        CONSTRAINT item_version_positive CHECK (version > 0)
      ) WITH (fillfactor = 80);
      -- The last guard against a double hold: a package belongs to one open item.
      CREATE UNIQUE INDEX item_unit_one_open ON item (unit_id) WHERE unit_id IS NOT NULL AND outcome IS NULL;

      ALTER TABLE unit ADD CONSTRAINT unit_held_for_item FOREIGN KEY (held_for) REFERENCES item (id);

      -- What happened. Append-only: the audit trail, and the order in which it is told.
      CREATE TABLE event (
        room_id  uuid NOT NULL,
        seq      integer NOT NULL,
        type     text NOT NULL,
        at       timestamptz NOT NULL,
        case_id  uuid NOT NULL,
        call_id  uuid,
        item_id  uuid,
        actor_id uuid NOT NULL,
        data     jsonb NOT NULL DEFAULT '{}',
        PRIMARY KEY (room_id, seq),
        CONSTRAINT event_in_room FOREIGN KEY (room_id) REFERENCES room (id),
        CONSTRAINT event_of_case FOREIGN KEY (case_id) REFERENCES surgical_case (id),
        CONSTRAINT event_of_call FOREIGN KEY (call_id) REFERENCES call (id),
        CONSTRAINT event_of_item FOREIGN KEY (item_id) REFERENCES item (id),
        CONSTRAINT event_by_person FOREIGN KEY (actor_id) REFERENCES person (id)
      );
      CREATE INDEX event_by_case ON event (case_id, seq);

      -- Where a package went. Append-only.
      CREATE TABLE movement (
        id               bigint GENERATED ALWAYS AS IDENTITY PRIMARY KEY,
        unit_id          uuid NOT NULL,
        item_id          uuid,
        at               timestamptz NOT NULL,
        actor_id         uuid NOT NULL,
        why              text NOT NULL,
        from_location_id uuid,
        to_location_id   uuid NOT NULL,
        to_state         text NOT NULL,
        CONSTRAINT movement_of_unit FOREIGN KEY (unit_id) REFERENCES unit (id),
        CONSTRAINT movement_for_item FOREIGN KEY (item_id) REFERENCES item (id),
        CONSTRAINT movement_by_person FOREIGN KEY (actor_id) REFERENCES person (id),
        CONSTRAINT movement_from FOREIGN KEY (from_location_id) REFERENCES location (id),
        CONSTRAINT movement_to FOREIGN KEY (to_location_id) REFERENCES location (id)
      );
      CREATE INDEX movement_by_unit ON movement (unit_id, at);

      CREATE TABLE idempotency_key (
        person_id    uuid NOT NULL,
        key          uuid NOT NULL,
        method       text NOT NULL,
        path         text NOT NULL,
        request_hash bytea NOT NULL,
        status       smallint NOT NULL,
        answer       text NOT NULL,
        created_at   timestamptz NOT NULL,
        PRIMARY KEY (person_id, key, method, path),
        CONSTRAINT idempotency_key_of_person FOREIGN KEY (person_id) REFERENCES person (id)
      );
      CREATE INDEX idempotency_key_by_age ON idempotency_key (created_at);

      -- Refused to everybody, the owner of the tables included.
      CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
      BEGIN
        RAISE EXCEPTION '% is append-only', TG_TABLE_NAME USING ERRCODE = 'restrict_violation';
      END $$;
      CREATE TRIGGER event_append_only BEFORE UPDATE OR DELETE ON event
        FOR EACH ROW EXECUTE FUNCTION refuse_change();
      CREATE TRIGGER event_not_emptied BEFORE TRUNCATE ON event
        FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
      CREATE TRIGGER movement_append_only BEFORE UPDATE OR DELETE ON movement
        FOR EACH ROW EXECUTE FUNCTION refuse_change();
      CREATE TRIGGER movement_not_emptied BEFORE TRUNCATE ON movement
        FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
    `)
  }

  async down(db: QueryRunner): Promise<void> {
    await db.query(`
      DROP TABLE idempotency_key, movement, event;
      DROP FUNCTION refuse_change;
      ALTER TABLE unit DROP CONSTRAINT unit_held_for_item;
      DROP TABLE item, call;
    `)
  }
}
