import { type Kysely, sql } from 'kysely';

/*
 * A REPLACE deletes what it meets without asking the triggers on DELETE, unless `recursive_triggers` is on; other
 * programs than ours have it off. So nothing of the record may be inserted over what is there. A plan that is kept
 * already is passed over: it is named by its content.
 */
const STANDS_THERE = `select raise(abort, 'this stands in the record already and is never changed')`;

const statements = [
  `create trigger job_entry_no_replace before insert on job_entry
     when exists (select 1 from job_entry where id = new.id)
       or exists (select 1 from job_entry where hash = new.hash)
     begin ${STANDS_THERE}; end`,
  `create trigger workshop_entry_no_replace before insert on workshop_entry
     when exists (select 1 from workshop_entry where id = new.id)
       or exists (select 1 from workshop_entry where hash = new.hash)
     begin ${STANDS_THERE}; end`,
  `create trigger signed_head_no_replace before insert on signed_head
     when exists (select 1 from signed_head where trail = new.trail and seq = new.seq)
     begin ${STANDS_THERE}; end`,
  `create trigger refused_entry_no_replace before insert on refused_entry
     when exists (select 1 from refused_entry where id = new.id)
     begin ${STANDS_THERE}; end`,
  `create trigger plan_no_replace before insert on plan
     when exists (select 1 from plan where hash = new.hash)
     begin select raise(ignore); end`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
