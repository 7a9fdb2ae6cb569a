import { type Kysely, sql } from 'kysely';

/**
 * The workshop's trail takes entries that the server makes for the record itself, such as the heads of a day,
 * and a photograph is found by the entries that name it. SQLite only: strict tables, triggers, an index on JSON.
 */
const statements = [
  // A column cannot be made nullable in place; no other table refers to this one.
  `create table workshop_entry_next (
     seq integer not null primary key,
     id text not null unique,
     kind text not null,
     -- Null for an entry that the server makes for the record itself.
     by_person text references person (id),
     at text not null,
     body text not null check (json_valid(body)),
     content_hash text not null,
     hash text not null unique
   ) strict`,
  `insert into workshop_entry_next select seq, id, kind, by_person, at, body, content_hash, hash
     from workshop_entry order by seq`,
  `drop table workshop_entry`,
  `alter table workshop_entry_next rename to workshop_entry`,
  `create trigger workshop_entry_in_order before insert on workshop_entry
     when new.seq <> (select coalesce(max(seq), 0) + 1 from workshop_entry)
     begin select raise(abort, 'the workshop trail has no gaps and is only added to'); end`,
  `create trigger workshop_entry_no_update before update on workshop_entry
     begin select raise(abort, 'the workshop trail is never changed'); end`,
  `create trigger workshop_entry_no_delete before delete on workshop_entry
     begin select raise(abort, 'the workshop trail is never deleted from'); end`,

  `create index job_entry_photo on job_entry (json_extract(body, '$.data.photo'))
     where kind = 'photographed'`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
