import { type Kysely, sql } from 'kysely';

/** People, tablets, keys, PINs, settings, tools and the workshop's own trail. SQLite only: strict tables and triggers. */
const statements = [
  `create table setting (
     key text not null primary key,
     value text not null
   ) strict`,

  `create table person (
     id text not null primary key references "user" (id),
     printed_name text not null,
     email text not null unique,
     roles text not null check (json_valid(roles)),
     active integer not null check (active in (0, 1)),
     created_at text not null,
     deactivated_at text
   ) strict`,

  `create trigger person_no_delete before delete on person
     begin select raise(abort, 'people are deactivated, never deleted'); end`,

  `create table attempt_count (
     key text not null primary key,
     failed integer not null,
     since text not null
   ) strict`,

  `create table one_time_link (
     token_hash text not null primary key,
     purpose text not null check (purpose in ('first owner', 'set password')),
     person_id text references person (id),
     created_at text not null,
     expires_at text not null,
     used_at text,
     check ((purpose = 'first owner') = (person_id is null))
   ) strict`,

  `create table device (
     id text not null primary key,
     name text not null,
     credential_hash text not null,
     enrolled_by text not null references person (id),
     enrolled_at text not null,
     state text not null check (state in ('active', 'lost')),
     last_heard_at text
   ) strict`,

  `create table author_key (
     id text not null primary key,
     person_id text not null references person (id),
     device_id text not null references device (id),
     public_key text not null unique,
     enrolled_at text not null,
     workshop_seq integer not null,
     revoked_at text
   ) strict`,
  `create index author_key_person on author_key (person_id, device_id)`,

  `create table signing_pin (
     person_id text not null primary key references person (id),
     hash text not null,
     salt text not null,
     params text not null check (json_valid(params)),
     failed integer not null,
     locked_until text,
     set_at text not null
   ) strict`,

  `create table pin_attempt (
     id text not null primary key,
     person_id text not null references person (id),
     at text not null,
     outcome text not null check (outcome in ('right', 'wrong', 'locked')),
     purpose text not null,
     device_id text references device (id)
   ) strict`,
  `create index pin_attempt_person on pin_attempt (person_id, at)`,

  `create table workshop_entry (
     seq integer not null primary key,
     id text not null unique,
     kind text not null,
     by_person text not null references person (id),
     at text not null,
     body text not null check (json_valid(body)),
     content_hash text not null,
     hash text not null unique
   ) strict`,
  `create trigger workshop_entry_in_order before insert on workshop_entry
     when new.seq <> (select coalesce(max(seq), 0) + 1 from workshop_entry)
     begin select raise(abort, 'the workshop trail has no gaps and is only added to'); end`,
  `create trigger workshop_entry_no_update before update on workshop_entry
     begin select raise(abort, 'the workshop trail is never changed'); end`,
  `create trigger workshop_entry_no_delete before delete on workshop_entry
     begin select raise(abort, 'the workshop trail is never deleted from'); end`,

  `create table signed_head (
     trail text not null,
     seq integer not null,
     hash text not null,
     at text not null,
     key text not null,
     signature text not null,
     primary key (trail, seq)
   ) strict`,
  `create trigger signed_head_no_update before update on signed_head
     begin select raise(abort, 'a signed head is never changed'); end`,
  `create trigger signed_head_no_delete before delete on signed_head
     begin select raise(abort, 'a signed head is never deleted'); end`,

  `create table tool (
     id text not null primary key,
     name text not null,
     kind text not null,
     serial text not null unique,
     range_low text,
     range_high text,
     unit text,
     due_on text,
     state text not null check (state in ('in use', 'withdrawn')),
     cycle_limit integer,
     cycles_used integer not null default 0
   ) strict`,

  `create table calibration (
     id text not null primary key,
     tool_id text not null references tool (id),
     "on" text not null,
     due_on text not null,
     certificate text not null,
     readings text not null check (json_valid(readings)),
     by_person text not null references person (id)
   ) strict`,
  `create index calibration_tool on calibration (tool_id, "on")`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
