import type { ToolRow } from '@db/tables';
import type { Tool } from '@/domain/tool';
import { type Asker, requireSomebody } from './asker';
import type { Db } from './database';
import { notFound } from './errors';

/** A tool as the tables hold it: what may be unknown is null, never absent. */
export type KeptTool = Tool & {
  torqueType: ToolRow['torque_type'];
  torqueClass: ToolRow['torque_class'];
  failure: string | null;
  cyclesUsed: number;
};

/** All tools at once, as tablets and pages judge by them. */
export async function readTools(db: Db, asker: Asker): Promise<KeptTool[]> {
  requireSomebody(asker);
  const rows = await db.selectFrom('tool').selectAll().orderBy('name').orderBy('serial').execute();
  return rows.map(toTool);
}

/** One tool as it is; whoever asks was checked before. */
export async function readTool(db: Db, id: string): Promise<KeptTool> {
  const row = await db.selectFrom('tool').selectAll().where('id', '=', id).executeTakeFirst();
  if (row === undefined) throw notFound('This tool');
  return toTool(row);
}

/** A row as the tool that it is of. */
export function toTool(row: ToolRow): KeptTool {
  return {
    id: row.id,
    name: row.name,
    kind: row.kind,
    serial: row.serial,
    rangeLow: row.range_low,
    rangeHigh: row.range_high,
    unit: row.unit,
    dueOn: row.due_on,
    state: row.state,
    cycleLimit: row.cycle_limit,
    cyclesUsed: row.cycles_used,
    torqueType: row.torque_type,
    torqueClass: row.torque_class,
    failure: row.failure,
  };
}
