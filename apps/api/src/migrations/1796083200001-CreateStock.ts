import type { MigrationInterface, QueryRunner } from 'typeorm'

export class CreateStock1796083200001 implements MigrationInterface {
  name = 'CreateStock1796083200001'

  async up(db: QueryRunner): Promise<void> {
    await db.query(`
      CREATE TABLE room (
        id            uuid PRIMARY KEY,
        number        integer NOT NULL CONSTRAINT room_number_once UNIQUE,
        -- One for each change of a call of this room, without a gap and in order of commit.
        revision      integer NOT NULL DEFAULT 0,
        -- One for each event of this room, case events included.
        event_seq     integer NOT NULL DEFAULT 0,
        last_event_at timestamptz NOT NULL DEFAULT '-infinity'
      ) WITH (fillfactor = 50);

      CREATE TABLE location (
        id         uuid PRIMARY KEY,
        code       text NOT NULL CONSTRAINT location_code_once UNIQUE,
        zone       text NOT NULL,
        room_id    uuid,
        -- Order in which a walk passes the places; smaller is nearer to the hatch.
        walk_order integer NOT NULL,
        CONSTRAINT location_of_room FOREIGN KEY (room_id) REFERENCES room (id),
        CONSTRAINT location_zone_known CHECK (zone IN
          ('room', 'core', 'hatch', 'loanerRack', 'quarantine', 'returns')),
        CONSTRAINT location_in_room CHECK ((zone = 'room') = (room_id IS NOT NULL))
      );

      CREATE TABLE supplier (
        id    uuid PRIMARY KEY,
        name  text NOT NULL CONSTRAINT supplier_name_once UNIQUE,
        email text NOT NULL
      );

      CREATE TABLE implant_system (
        id          uuid PRIMARY KEY,
        name        text NOT NULL CONSTRAINT implant_system_name_once UNIQUE,
        maker       text NOT NULL,
        supplier_id uuid NOT NULL,
        CONSTRAINT implant_system_of_supplier FOREIGN KEY (supplier_id) REFERENCES supplier (id)
      );

      CREATE TABLE catalogue_item (
        id          uuid PRIMARY KEY,
        ref         text NOT NULL CONSTRAINT catalogue_item_ref_once UNIQUE,
        gtin        text NOT NULL CONSTRAINT catalogue_item_gtin_once UNIQUE,
        -- Labeller code and product number where the maker labels by HIBC.
        hibc_lic     text,
        hibc_product text,
        system_id   uuid,
        supplier_id uuid NOT NULL,
        category    text NOT NULL,
        kind        text NOT NULL,
        part_name   text NOT NULL,
        label       text NOT NULL,
        size        text,
        size_order  numeric NOT NULL,
        variant     text,
        diameter_mm double precision,
        height_mm   double precision,
        side        text NOT NULL,
        taper       text,
        group_code  text,
        type_code   text,
        par         integer NOT NULL DEFAULT 0,
        stocked     boolean NOT NULL DEFAULT true,
        active      boolean NOT NULL DEFAULT true,
        CONSTRAINT catalogue_item_of_system FOREIGN KEY (system_id) REFERENCES implant_system (id),
        CONSTRAINT catalogue_item_of_supplier FOREIGN KEY (supplier_id) REFERENCES supplier (id),
        CONSTRAINT catalogue_item_gtin_14 CHECK (gtin ~ '^[0-9]{14}$'),
        CONSTRAINT catalogue_item_category_known CHECK (category IN ('implant', 'sterile', 'tray')),
        CONSTRAINT catalogue_item_kind_known CHECK (kind IN
          ('head', 'stem', 'glenoid', 'shell', 'liner', 'femur', 'tibia', 'insert', 'patella', 'cement', 'other')),
        CONSTRAINT catalogue_item_side_known CHECK (side IN ('left', 'right', 'either'))
      );
      CREATE INDEX catalogue_item_rail ON catalogue_item (system_id, kind, size_order);

      CREATE TABLE unit (
        id                uuid PRIMARY KEY,
        catalogue_item_id uuid NOT NULL,
        lot               text NOT NULL,
        serial            text,
        use_by_on         date NOT NULL,
        state             text NOT NULL,
        -- The item for which this package is kept. One item at a time: this column is the hold.
        held_for          uuid,
        location_id       uuid NOT NULL,
        home_location_id  uuid NOT NULL,
        -- The tray that carries this package, itself a unit.
        carried_by        uuid,
        sterile           boolean NOT NULL DEFAULT true,
        owner             text NOT NULL DEFAULT 'owned',
        -- Copies that the statement that holds packages sorts by; a trigger keeps them true.
        place_room_id     uuid,
        walk_order        integer NOT NULL DEFAULT 0,
        owner_rank        smallint NOT NULL DEFAULT 0,
        received_at       timestamptz NOT NULL DEFAULT now(),
        note              text,
        CONSTRAINT unit_of_item FOREIGN KEY (catalogue_item_id) REFERENCES catalogue_item (id),
        CONSTRAINT unit_at_location FOREIGN KEY (location_id) REFERENCES location (id),
        CONSTRAINT unit_home FOREIGN KEY (home_location_id) REFERENCES location (id),
        CONSTRAINT unit_on_tray FOREIGN KEY (carried_by) REFERENCES unit (id),
        CONSTRAINT unit_state_known CHECK (state IN
          ('available', 'held', 'pulled', 'inRoom', 'putBack', 'opened', 'implanted', 'used', 'notImplanted',
           'quarantined', 'recalled', 'expired', 'shippedBack', 'writtenOff')),
        CONSTRAINT unit_owner_known CHECK (owner IN ('owned', 'consigned', 'loaner')),
        CONSTRAINT unit_hold_has_item CHECK ((state IN ('held', 'pulled', 'inRoom', 'opened')) = (held_for IS NOT NULL)
          OR (state IN ('quarantined', 'recalled') AND held_for IS NOT NULL))
      ) WITH (fillfactor = 80);
      -- First to expire first: the order in which packages are held, over those that are free outside the rooms.
      CREATE INDEX unit_free_in_core ON unit (catalogue_item_id, use_by_on, walk_order, owner_rank, id)
        WHERE state = 'available' AND sterile AND place_room_id IS NULL;
      CREATE INDEX unit_free_in_room ON unit (place_room_id, catalogue_item_id, use_by_on)
        WHERE state = 'available' AND sterile AND place_room_id IS NOT NULL;
      CREATE UNIQUE INDEX unit_held_once ON unit (held_for) WHERE held_for IS NOT NULL;
      CREATE INDEX unit_held_of_item ON unit (catalogue_item_id) WHERE held_for IS NOT NULL;
      CREATE INDEX unit_by_label ON unit (catalogue_item_id, lot, serial);
      -- The same package is not received twice.
      CREATE UNIQUE INDEX unit_serial_once ON unit (catalogue_item_id, serial) WHERE serial IS NOT NULL;

      CREATE FUNCTION unit_copy_place() RETURNS trigger LANGUAGE plpgsql AS $$
      BEGIN
        SELECT l.room_id, l.walk_order INTO NEW.place_room_id, NEW.walk_order
          FROM location l WHERE l.id = NEW.location_id;
        NEW.owner_rank := CASE NEW.owner WHEN 'owned' THEN 0 WHEN 'consigned' THEN 1 ELSE 2 END;
        RETURN NEW;
      END $$;
      CREATE TRIGGER unit_place_is_true BEFORE INSERT OR UPDATE OF location_id, owner ON unit
        FOR EACH ROW EXECUTE FUNCTION unit_copy_place();
    `)
  }

  async down(db: QueryRunner): Promise<void> {
    await db.query(
      `DROP TABLE unit; DROP FUNCTION unit_copy_place; DROP TABLE catalogue_item, implant_system, supplier, location, room`,
    )
  }
}
