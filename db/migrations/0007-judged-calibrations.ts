import { type Kysely, sql } from 'kysely';

/** Calibrations are judged from their readings by a tool's type and class; what was kept before is not judged. */
const statements = [
  `alter table tool add column torque_type text check (torque_type in ('I', 'II'))`,
  `alter table tool add column torque_class text check (torque_class in ('A', 'B', 'C', 'D', 'E', 'F', 'G'))`,
  // Why its last calibration failed, in words; null where it did not.
  `alter table tool add column failure text`,
  `alter table calibration add column verdict text not null default 'not judged'
     check (verdict in ('passed', 'failed', 'not judged'))`,
  `alter table calibration add column reasons text not null default '[]' check (json_valid(reasons))`,
];

export async function up(db: Kysely<never>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
