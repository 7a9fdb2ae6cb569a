import { type Kysely, sql } from 'kysely';

/** By which certificate somebody signs, and until which day their authorisation to sign counts. */
const statements = [
  `alter table person add column certificate_number text`,
  `alter table person add column certificate_kind text
     check ((certificate_kind is null) = (certificate_number is null))`,
  // The last day; null where no end is set.
  `alter table person add column authorised_until text`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
