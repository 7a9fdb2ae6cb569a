import type { Workshop } from '@/domain/job-state';
import { failureWords } from '@/domain/calibration';
import type { Db } from './database';

/*
 * The workshop as it was at each of its entries. A tablet judges by the workshop that it last heard of, which
 * may be a week old; what was in order by that one has to be told apart from what never was. People and tools
 * are read back out of the workshop's own trail, which holds every change to them.
 */

interface Moment {
  seq: number;
  workshop: Workshop;
}

/** All states of the workshop so far. */
export interface WorkshopHistory {
  /** The newest entry's number. */
  seq: number;
  /** The workshop after an entry; the newest for a number that is still to come. */
  at(seq: number): Workshop;
  /** The last entry that was there at a time, RFC 3339 UTC in milliseconds. */
  seqAt(time: string): number;
  /** When the server was last restored from a backup, as far as the trail tells. */
  restoredAt: string | null;
  /** Every entry that tells of a restore: from its number on, numbers may have meant something else before. */
  restores: readonly { seq: number; at: string }[];
}

interface Remembered {
  moments: Moment[];
  /** When each entry was made; entry `n` is at index `n − 1`. */
  times: string[];
  calibratedOn: Map<string, string>;
  restores: { seq: number; at: string }[];
}

/** What a database's trail came to when it was last read; entries are never changed, so it only grows. */
const remembered = new WeakMap<Db, Remembered>();

/**
 * Reads the workshop's history; `db` is what remembers it, `reader` what it is read with. Call it before
 * anything is appended in the same transaction, so that nothing is remembered that may be rolled back.
 */
export async function readWorkshopHistory(db: Db, reader: Db = db): Promise<WorkshopHistory> {
  const memory = remembered.get(db) ?? begin();
  const rows = await reader
    .selectFrom('workshop_entry')
    .select(['seq', 'kind', 'at', 'body'])
    .where('seq', '>', memory.times.length)
    .orderBy('seq')
    .execute();
  for (const row of rows) remember(memory, row);
  remembered.set(db, memory);
  const { moments, times } = memory;
  const seq = times.length;
  return {
    seq,
    at: (wanted) => ({ ...momentAt(moments, wanted).workshop, seq: Math.min(wanted, seq) }),
    seqAt: (time) => countUpTo(times, time),
    restoredAt: memory.restores.at(-1)?.at ?? null,
    restores: memory.restores,
  };
}

function begin(): Remembered {
  const workshop = { seq: 0, zone: 'UTC', people: [], tools: [] };
  return { moments: [{ seq: 0, workshop }], times: [], calibratedOn: new Map(), restores: [] };
}

function remember(memory: Remembered, row: { seq: number; kind: string; at: string; body: string }): void {
  memory.times.push(row.at);
  if (row.kind === 'restored') memory.restores.push({ seq: row.seq, at: row.at });
  const before = momentAt(memory.moments, row.seq).workshop;
  const { data } = JSON.parse(row.body) as { data: Data };
  const after = applyWorkshopEntry(before, row.kind, data, memory.calibratedOn);
  if (after !== before) memory.moments.push({ seq: row.seq, workshop: after });
}

function momentAt(moments: readonly Moment[], seq: number): Moment {
  let low = 0;
  let high = moments.length - 1;
  while (low < high) {
    const middle = Math.ceil((low + high) / 2);
    if ((moments[middle]?.seq ?? 0) <= seq) low = middle;
    else high = middle - 1;
  }
  const found = moments[low];
  if (found === undefined) throw new RangeError('The history of the workshop has no beginning.');
  return found;
}

/** How many of the times, which only rise, are not later than this one. */
function countUpTo(times: readonly string[], time: string): number {
  let low = 0;
  let high = times.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((times[middle] ?? '') <= time) low = middle + 1;
    else high = middle;
  }
  return low;
}

type Tool = Workshop['tools'][number];
type Person = Workshop['people'][number];

/** The data of a workshop entry, as the modules that append them write it. */
type Data = Readonly<Record<string, unknown>>;

function applyWorkshopEntry(
  workshop: Workshop,
  kind: string,
  data: Data,
  calibratedOn: Map<string, string>,
): Workshop {
  const person = (change: Partial<Person>): Workshop => ({
    ...workshop,
    people: workshop.people.map((one) => (one.id === data.person ? { ...one, ...change } : one)),
  });
  const tool = (change: Partial<Tool>): Workshop => ({
    ...workshop,
    tools: workshop.tools.map((one) => (one.id === data.tool ? { ...one, ...change } : one)),
  });
  switch (kind) {
    case 'workshop-set':
      return { ...workshop, zone: String(data.zone) };
    case 'person-added':
      return { ...workshop, people: [...workshop.people, addedPerson(data)] };
    case 'person-renamed':
      return person({ name: String(data.to) });
    case 'roles-changed':
      return person({ roles: data.to as string[] });
    case 'authorisation-changed': {
      const { certificate, authorisedUntil } = data as Pick<Person, 'certificate' | 'authorisedUntil'>;
      return person({ certificate, authorisedUntil });
    }
    case 'person-deactivated':
      return person({ active: false });
    case 'person-reactivated':
      return person({ active: true });
    case 'tool-added':
      return { ...workshop, tools: [...workshop.tools, addedTool(data)] };
    case 'tool-changed':
      return tool(data.to as Partial<Tool>);
    case 'tool-withdrawn':
      return tool({ state: 'withdrawn' });
    case 'tool-returned':
      return tool({ state: 'in use' });
    case 'calibration-recorded':
      return isNewestCalibration(data, calibratedOn) ? tool(calibrated(data)) : workshop;
    default:
      return workshop;
  }
}

function addedPerson(data: Data): Person {
  return {
    id: String(data.person),
    name: String(data.name),
    roles: data.roles as string[],
    active: true,
    certificate: null,
    authorisedUntil: null,
  };
}

function addedTool(data: Data): Tool {
  const { tool, ...facts } = data;
  return {
    failure: null,
    ...(facts as Omit<Tool, 'id' | 'state' | 'cyclesUsed'>),
    id: String(tool),
    state: 'in use',
    cyclesUsed: 0,
  };
}

/** One that failed moves no date; those of older versions were not judged. */
function calibrated({ verdict, dueOn, reasons }: Data): Partial<Tool> {
  if (verdict !== 'failed') return { dueOn: String(dueOn), failure: null };
  return { failure: failureWords(reasons as string[]) };
}

/** An older certificate that is written down late moves no due date. */
function isNewestCalibration(data: Data, calibratedOn: Map<string, string>): boolean {
  const tool = String(data.tool);
  const on = String(data.on);
  if (on < (calibratedOn.get(tool) ?? '')) return false;
  calibratedOn.set(tool, on);
  return true;
}
