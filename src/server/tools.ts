import type { ToolRow } from '@db/tables';
import { TORQUE_TOOL_KIND } from '@/domain/calibration';
import { CALIBRATED_KINDS, CLASSES_OF_TYPE, type Tool } from '@/domain/tool';
import { dayAfter, DUE_SOON_DAYS } from '@/domain/tool-standing';
import { type Actor, requireRole } from './actor';
import { type Calibration, failureOfNewest, listCalibrations } from './calibrations';
import type { Clock, Ids } from './clock';
import { requireSomebody } from './asker';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { type KeptTool, readTool, readTools, toTool } from './tool-rows';
import { readToday } from './workshop';
import { appendWorkshopEntry } from './workshop-trail';

export type NewTool = Omit<Tool, 'id' | 'state' | 'cyclesUsed' | 'failure'>;
export type ToolChange = { [K in Exclude<keyof NewTool, 'dueOn'>]?: NewTool[K] | undefined } & {
  state?: Tool['state'] | undefined;
};
/** Those in use whose date is near, or those that class A may not use as they are. */
export type ToolsShown = 'due' | 'past';

interface Making {
  clock: Clock;
  ids: Ids;
}

/** Every tool by name, a page at a time; the withdrawn too, since their serials stand in trails. */
export async function listTools(
  db: Db,
  actor: Actor,
  { cursor, show }: { cursor?: string | undefined; show?: ToolsShown | undefined },
  clock: Clock,
): Promise<{ tools: KeptTool[]; cursor?: string }> {
  requireSomebody(actor);
  let query = selectTools(db, show, await readToday(db, clock))
    .orderBy('name')
    .orderBy('serial')
    .limit(LIST_PAGE + 1);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('name', 'serial'), '>', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, (row) => [row.name, row.serial]);
  return { tools: rows.map(toTool), ...next };
}

function selectTools(db: Db, show: ToolsShown | undefined, on: string) {
  const tools = db.selectFrom('tool').selectAll();
  if (show === undefined) return tools;
  const inUse = tools.where('state', '=', 'in use');
  if (show === 'due') {
    const soon = dayAfter(on, DUE_SOON_DAYS);
    return inUse.where('failure', 'is', null).where('due_on', '>=', on).where('due_on', '<=', soon);
  }
  return inUse.where((eb) =>
    eb.or([
      eb('failure', 'is not', null),
      eb('due_on', '<', on),
      eb.and([eb('due_on', 'is', null), eb('kind', 'in', CALIBRATED_KINDS)]),
      eb('cycles_used', '>', eb.ref('cycle_limit')),
    ]),
  );
}

/** One tool with its calibrations, the newest first. */
export async function getTool(
  db: Db,
  actor: Actor,
  id: string,
): Promise<KeptTool & { calibrations: Calibration[] }> {
  requireSomebody(actor);
  return { ...(await readTool(db, id)), calibrations: await listCalibrations(db, id) };
}

/** The tool that a page is about, or undefined where there is none. */
export async function findToolForPage(
  db: Db,
  actor: Actor | undefined,
  id: string | undefined,
): Promise<KeptTool | undefined> {
  if (actor === undefined || id === undefined) return undefined;
  return (await readTools(db, actor)).find((tool) => tool.id === id);
}

/**
 * Adds a tool; its due date, if it needs one, is what its last certificate says. Of a torque tool only a judged
 * calibration gives it one.
 */
export async function addTool(trx: Trx, actor: Actor, tool: NewTool, making: Making): Promise<KeptTool> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  requireClass(tool);
  if (tool.kind === TORQUE_TOOL_KIND && tool.dueOn !== null) {
    throw new AppError(
      'invalid-field',
      'A torque wrench gets its date from a calibration. Add it without one, then enter its certificate.',
      { field: 'dueOn' },
    );
  }
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
    torque_type: tool.torqueType ?? null,
    torque_class: tool.torqueClass ?? null,
    failure: null,
  };
  await trx.insertInto('tool').values(row).execute();
  const { torqueType = null, torqueClass = null, ...facts } = tool;
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'tool-added', data: { ...facts, torqueType, torqueClass, tool: row.id } },
    making,
  );
  return toTool(row);
}

/**
 * Corrects a tool's facts, withdraws it, or takes it back into use. Its due date moves only by a calibration. Where
 * its newest calibration would fail by the changed facts, the tool is not fit until it is calibrated again.
 */
export async function changeTool(
  trx: Trx,
  actor: Actor,
  id: string,
  change: ToolChange,
  making: Making,
): Promise<KeptTool> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  const before = await readTool(trx, id);
  const changed = Object.fromEntries(Object.entries(change).filter(([, value]) => value !== undefined));
  const changedTool: KeptTool = { ...before, ...changed };
  requireClass(changedTool);
  const calibrations = await listCalibrations(trx, id);
  if (calibrations.length > 0) requireSameRule(before, changedTool);
  const after: KeptTool = {
    ...changedTool,
    failure: before.failure ?? failureOfNewest(changedTool, calibrations),
  };
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
      torque_type: after.torqueType,
      torque_class: after.torqueClass,
      failure: after.failure,
    })
    .where('id', '=', id)
    .execute();
  return after;
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

/** Type and class are of torque tools, and go together. */
function requireClass({
  kind,
  torqueType,
  torqueClass,
}: Pick<Tool, 'kind' | 'torqueType' | 'torqueClass'>): void {
  if (!torqueType && !torqueClass) return;
  if (kind !== TORQUE_TOOL_KIND)
    throw wrongClass('Only a torque wrench has a type and a class. Leave them out.', 'torqueType');
  if (!torqueType || !torqueClass)
    throw wrongClass('Type and class go together. Say both, or neither.', 'torqueClass');
  if (!CLASSES_OF_TYPE[torqueType].includes(torqueClass)) {
    throw wrongClass(
      `Type ${torqueType} has the classes ${CLASSES_OF_TYPE[torqueType].join(', ')}. Look at its plate.`,
      'torqueClass',
    );
  }
}

function wrongClass(words: string, field: string): AppError {
  return new AppError('invalid-field', words, { field });
}

/** A tool that was calibrated as one kind never becomes a kind of another rule: it would take its date along. */
function requireSameRule(before: Tool, after: Tool): void {
  if ((before.kind === TORQUE_TOOL_KIND) === (after.kind === TORQUE_TOOL_KIND)) return;
  throw new AppError(
    'conflict',
    `It was calibrated as ${before.kind}, so its kind stays. If it is another tool, add it as itself.`,
    { field: 'kind' },
  );
}
