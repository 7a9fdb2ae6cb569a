import { type Kysely, sql } from 'kysely';

/** Mail that is to leave the house, queued in the transaction that it tells of. */
const statements = [
  `create table mail (
     id text not null primary key,
     job_id text references job (id),
     purpose text not null check (purpose in ('head to witness', 'heads of the day', 'handover to customer', 'trial')),
     address text not null,
     subject text not null,
     body text not null,
     made_at text not null,
     state text not null check (state in ('waiting', 'sent', 'failed')),
     attempts integer not null,
     next_at text not null,
     sent_at text,
     -- 'service' or 'here': the fake of the service keeps it on this machine.
     via text check (via in ('service', 'here')),
     trouble text
   ) strict`,
  `create index mail_waiting on mail (next_at) where state = 'waiting'`,
  `create index mail_made on mail (made_at, id)`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
