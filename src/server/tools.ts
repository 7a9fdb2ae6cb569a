import type { CalibrationRow, ToolRow } from '@db/tables';
import type { Tool } from '@/domain/tool';
import { type Actor, requireRole } from './actor';
import type { Clock, Ids } from './clock';
import { type Asker, requireSomebody } from './asker';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import { AppError, notFound } from './errors';
import { appendWorkshopEntry } from './workshop-trail';

/** What the maker of a calibration found: the reference against what the tool showed, as read. */
export interface CalibrationReading {
  set: string;
  reference: string;
  unit: string;
}

export interface Calibration {
  id: string;
  tool: string;
  on: string;
  dueOn: string;
  certificate: string;
  readings: CalibrationReading[];
  by: string;
}

export type NewTool = Omit<Tool, 'id' | 'state' | 'cyclesUsed'>;
export type ToolChange = { [K in Exclude<keyof NewTool, 'dueOn'>]?: NewTool[K] | undefined } & {
  state?: Tool['state'] | undefined;
};

interface Making {
  clock: Clock;
  ids: Ids;
}

/** Every tool by name, a page at a time; the withdrawn too, since their serials stand in trails. */
export async function listTools(
  db: Db,
  actor: Actor,
  { cursor }: { cursor?: string | undefined } = {},
): Promise<{ tools: Tool[]; cursor?: string }> {
  requireSomebody(actor);
  let query = db
    .selectFrom('tool')
    .selectAll()
    .orderBy('name')
    .orderBy('serial')
    .limit(LIST_PAGE + 1);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('name', 'serial'), '>', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, (row) => [row.name, row.serial]);
  return { tools: rows.map(toTool), ...next };
}

/** All tools at once, as tablets and pages judge by them. */
export async function readTools(db: Db, asker: Asker): Promise<Tool[]> {
  requireSomebody(asker);
  const rows = await db.selectFrom('tool').selectAll().orderBy('name').orderBy('serial').execute();
  return rows.map(toTool);
}

/** One tool with its calibrations, the newest first. */
export async function getTool(
  db: Db,
  actor: Actor,
  id: string,
): Promise<Tool & { calibrations: Calibration[] }> {
  requireSomebody(actor);
  const row = await getRow(db, id);
  const calibrations = await db
    .selectFrom('calibration')
    .selectAll()
    .where('tool_id', '=', id)
    .orderBy('on', 'desc')
    .execute();
  return { ...toTool(row), calibrations: calibrations.map(toCalibration) };
}

/** Adds a tool; its due date, if it needs one, is what its last certificate says. */
export async function addTool(trx: Trx, actor: Actor, tool: NewTool, making: Making): Promise<Tool> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  await requireFreeSerial(trx, tool.serial, undefined);
  const row: ToolRow = {
    id: making.ids.next(),
    name: tool.name,
    kind: tool.kind,
    serial: tool.serial,
    range_low: tool.rangeLow,
    range_high: tool.rangeHigh,
    unit: tool.unit,
    due_on: tool.dueOn,
    state: 'in use',
    cycle_limit: tool.cycleLimit,
    cycles_used: 0,
  };
  await trx.insertInto('tool').values(row).execute();
  await appendWorkshopEntry(trx, actor, { kind: 'tool-added', data: { ...tool, tool: row.id } }, making);
  return toTool(row);
}

/** Corrects a tool's facts, withdraws it, or takes it back into use. Its due date moves only by a calibration. */
export async function changeTool(
  trx: Trx,
  actor: Actor,
  id: string,
  change: ToolChange,
  making: Making,
): Promise<Tool> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  const before = toTool(await getRow(trx, id));
  const changed = Object.fromEntries(Object.entries(change).filter(([, value]) => value !== undefined));
  const after: Tool = { ...before, ...changed };
  if (after.serial !== before.serial) await requireFreeSerial(trx, after.serial, id);
  const { state: stateBefore, ...factsBefore } = before;
  const { state, ...facts } = after;
  if (JSON.stringify(facts) !== JSON.stringify(factsBefore)) {
    await appendWorkshopEntry(
      trx,
      actor,
      { kind: 'tool-changed', data: { tool: id, from: factsBefore, to: facts } },
      making,
    );
  }
  if (state !== stateBefore) {
    const kind = state === 'withdrawn' ? 'tool-withdrawn' : 'tool-returned';
    await appendWorkshopEntry(trx, actor, { kind, data: { tool: id, serial: after.serial } }, making);
  }
  await trx
    .updateTable('tool')
    .set({
      name: after.name,
      kind: after.kind,
      serial: after.serial,
      range_low: after.rangeLow,
      range_high: after.rangeHigh,
      unit: after.unit,
      state: after.state,
      cycle_limit: after.cycleLimit,
    })
    .where('id', '=', id)
    .execute();
  return after;
}

/** Records a calibration, which moves the tool's due date and starts its cycles anew. */
export async function recordCalibration(
  trx: Trx,
  actor: Actor,
  toolId: string,
  calibration: Omit<Calibration, 'id' | 'tool' | 'by'>,
  making: Making,
): Promise<Calibration> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  const tool = await getRow(trx, toolId);
  if (calibration.dueOn <= calibration.on) {
    throw new AppError('invalid-field', 'The next calibration has to be due after this one was made.', {
      field: 'dueOn',
    });
  }
  const row: CalibrationRow = {
    id: making.ids.next(),
    tool_id: toolId,
    on: calibration.on,
    due_on: calibration.dueOn,
    certificate: calibration.certificate,
    readings: JSON.stringify(calibration.readings),
    by_person: actor.personId,
  };
  await trx.insertInto('calibration').values(row).execute();
  const newest = await trx
    .selectFrom('calibration')
    .select(['id', 'due_on'])
    .where('tool_id', '=', toolId)
    .orderBy('on', 'desc')
    .orderBy('id', 'desc')
    .limit(1)
    .executeTakeFirstOrThrow();
  // An old certificate that is entered late neither moves the date back nor forgets the cycles since.
  if (newest.id === row.id) {
    await trx
      .updateTable('tool')
      .set({ due_on: row.due_on, cycles_used: 0 })
      .where('id', '=', toolId)
      .execute();
  }
  const { on, dueOn, certificate, readings } = calibration;
  await appendWorkshopEntry(
    trx,
    actor,
    {
      kind: 'calibration-recorded',
      data: {
        calibration: row.id,
        tool: toolId,
        serial: tool.serial,
        on,
        dueOn,
        certificate,
        readings: readings.map(({ set, reference, unit }) => ({ set, reference, unit })),
        cyclesUsedBefore: tool.cycles_used,
      },
    },
    making,
  );
  return toCalibration(row);
}

async function requireFreeSerial(trx: Trx, serial: string, except: string | undefined): Promise<void> {
  const other = await trx
    .selectFrom('tool')
    .select(['id', 'name'])
    .where('serial', '=', serial)
    .executeTakeFirst();
  if (other === undefined || other.id === except) return;
  throw new AppError('conflict', `${other.name} has this serial number already. Check the plate.`, {
    field: 'serial',
  });
}

async function getRow(db: Db, id: string): Promise<ToolRow> {
  const row = await db.selectFrom('tool').selectAll().where('id', '=', id).executeTakeFirst();
  if (row === undefined) throw notFound('This tool');
  return row;
}

function toTool(row: ToolRow): Tool {
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
  };
}

function toCalibration(row: CalibrationRow): Calibration {
  return {
    id: row.id,
    tool: row.tool_id,
    on: row.on,
    dueOn: row.due_on,
    certificate: row.certificate,
    readings: JSON.parse(row.readings) as CalibrationReading[],
    by: row.by_person,
  };
}
