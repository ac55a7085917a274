import type { MigrationInterface, QueryRunner } from 'typeorm'

export class CreatePeople1796083200000 implements MigrationInterface {
  name = 'CreatePeople1796083200000'

  async up(db: QueryRunner): Promise<void> {
    await db.query(`
      CREATE TABLE person (
        id            uuid PRIMARY KEY,
        email         text NOT NULL CONSTRAINT person_email_once UNIQUE,
        name          text NOT NULL,
        initials      text NOT NULL,
        role          text NOT NULL,
        active        boolean NOT NULL DEFAULT true,
        password_hash text,
        pin_hash      text,
        created_at    timestamptz NOT NULL DEFAULT now(),
        CONSTRAINT person_role_known CHECK (role IN
          ('surgeon', 'scrub', 'circulator', 'runner', 'core', 'charge', 'coordinator', 'admin')),
        CONSTRAINT person_email_lower CHECK (email = lower(email))
      );

      -- One sign-in. Every refresh token that descends from it ends with it.
      CREATE TABLE session (
        id            uuid PRIMARY KEY,
        person_id     uuid NOT NULL,
        created_at    timestamptz NOT NULL,
        last_seen_at  timestamptz NOT NULL,
        expires_at    timestamptz NOT NULL,
        ended_at      timestamptz,
        ended_because text,
        CONSTRAINT session_of_person FOREIGN KEY (person_id) REFERENCES person (id)
      );
      CREATE INDEX session_by_person ON session (person_id) WHERE ended_at IS NULL;

      -- Only the hash is kept: the token itself never rests in the database.
      CREATE TABLE refresh_token (
        token_hash  bytea PRIMARY KEY,
        session_id  uuid NOT NULL,
        issued_at   timestamptz NOT NULL,
        expires_at  timestamptz NOT NULL,
        used_at     timestamptz,
        CONSTRAINT refresh_token_of_session FOREIGN KEY (session_id) REFERENCES session (id)
      );
      CREATE INDEX refresh_token_by_session ON refresh_token (session_id);

      -- Failed attempts only; what is counted is the account (or PIN) and the address it came from.
      CREATE TABLE sign_in_failure (
        id          bigint GENERATED ALWAYS AS IDENTITY PRIMARY KEY,
        account     text NOT NULL,
        address     text NOT NULL,
        at          timestamptz NOT NULL
      );
      CREATE INDEX sign_in_failure_by_account ON sign_in_failure (account, at);
      CREATE INDEX sign_in_failure_by_address ON sign_in_failure (address, at);

      CREATE TABLE house_setting (
        key        text PRIMARY KEY,
        value      jsonb NOT NULL,
        changed_at timestamptz NOT NULL DEFAULT now()
      );
    `)
  }

  async down(db: QueryRunner): Promise<void> {
    await db.query(`DROP TABLE house_setting, sign_in_failure, refresh_token, session, person`)
  }
}
