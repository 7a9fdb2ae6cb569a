import { type Kysely, sql } from 'kysely';

/** Documents under revision control, plans, jobs and their trails. SQLite only: strict tables and triggers. */
const statements = [
  `create table document_revision (
     kind text not null check (kind in ('engine', 'procedure', 'route')),
     id text not null,
     revision integer not null,
     hash text not null,
     text text not null,
     body text not null check (json_valid(body)),
     state text not null check (state in ('draft', 'in review', 'released', 'withdrawn')),
     written_by text not null references person (id),
     written_at text not null,
     released_by text references person (id),
     released_at text,
     withdrawn_by text references person (id),
     withdrawn_at text,
     stops_jobs integer not null default 0 check (stops_jobs in (0, 1)),
     primary key (kind, id, revision)
   ) strict`,
  `create trigger document_revision_fixed before update on document_revision
     when old.state in ('released', 'withdrawn') and not (
       old.state = 'released' and new.state = 'withdrawn'
       and new.kind = old.kind and new.id = old.id and new.revision = old.revision
       and new.hash = old.hash and new.text = old.text and new.body = old.body
       and new.written_by = old.written_by and new.written_at = old.written_at
       and new.released_by is old.released_by and new.released_at is old.released_at)
     begin select raise(abort, 'a released revision is never changed, only withdrawn'); end`,
  `create trigger document_revision_kept before delete on document_revision
     when old.state in ('released', 'withdrawn')
     begin select raise(abort, 'a released revision is never deleted'); end`,

  `create table plan (
     hash text not null primary key,
     body text not null check (json_valid(body)),
     created_at text not null
   ) strict`,
  `create trigger plan_no_update before update on plan
     begin select raise(abort, 'a plan is never changed'); end`,
  `create trigger plan_no_delete before delete on plan
     begin select raise(abort, 'a plan is never deleted'); end`,

  `create table job (
     id text not null primary key,
     number text not null unique,
     plan_hash text not null references plan (hash),
     route_id text not null,
     state text not null check (state in ('open', 'parked', 'handed over', 'ended')),
     opened_by text not null references person (id),
     opened_at text not null,
     promised_on text,
     note text,
     vehicle_label text not null
   ) strict`,
  `create index job_state on job (state, opened_at)`,

  `create table job_identity (
     job_id text not null references job (id),
     field text not null,
     value text not null,
     salt text not null,
     primary key (job_id, field)
   ) strict`,

  `create table job_person (
     job_id text not null references job (id),
     person_id text not null references person (id),
     primary key (job_id, person_id)
   ) strict`,
  `create index job_person_person on job_person (person_id)`,

  // No reference to person and device: what the server itself records names neither.
  `create table job_entry (
     job_id text not null references job (id),
     seq integer not null,
     id text not null unique,
     kind text not null,
     step text,
     -- Both are null for an entry that the server makes for the record itself.
     by_person text references person (id),
     device_id text references device (id),
     device_seq integer not null,
     at text not null,
     recorded_at text not null,
     body text not null check (json_valid(body)),
     content_hash text not null,
     hash text not null unique,
     signature text,
     key_id text,
     primary key (job_id, seq),
     check ((by_person is null) = (device_id is null)),
     check ((by_person is null) = (signature is null))
   ) strict`,
  `create index job_entry_device on job_entry (job_id, device_id, device_seq)`,
  `create index job_entry_person on job_entry (by_person, job_id)`,
  `create trigger job_entry_in_order before insert on job_entry
     when new.seq <> (select coalesce(max(seq), 0) + 1 from job_entry where job_id = new.job_id)
     begin select raise(abort, 'the trail of a job has no gaps and is only added to'); end`,
  `create trigger job_entry_no_update before update on job_entry
     begin select raise(abort, 'the trail of a job is never changed'); end`,
  `create trigger job_entry_no_delete before delete on job_entry
     begin select raise(abort, 'the trail of a job is never deleted from'); end`,

  `create table refused_entry (
     id text not null primary key,
     entry_id text,
     job_id text,
     device_id text,
     device_seq integer,
     content_hash text,
     body text not null,
     code text not null,
     message text not null,
     at text not null,
     by_person text
   ) strict`,
  `create index refused_entry_entry on refused_entry (entry_id)`,
  `create index refused_entry_job on refused_entry (job_id, device_id, device_seq)`,
  `create trigger refused_entry_no_update before update on refused_entry
     begin select raise(abort, 'a refused entry is kept as it came'); end`,
  `create trigger refused_entry_no_delete before delete on refused_entry
     begin select raise(abort, 'a refused entry is kept as it came'); end`,

  `create table job_fold (
     job_id text not null primary key references job (id),
     seq integer not null,
     head_hash text not null,
     state text not null check (json_valid(state))
   ) strict`,

  `create table photo (
     hash text not null primary key,
     bytes integer not null,
     type text not null,
     stored_at text not null,
     uploaded_by_device text references device (id)
   ) strict`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
