import { applyEntry, emptyJob, replay } from '@/domain/job';
import type { Recorded } from '@/domain/entry';
import type { JobState } from '@/domain/job-state';
import type { Plan } from '@/domain/plan';
import type { Db, Trx } from './database';
import { notFound } from './errors';
import { getPlan } from './plans';
import { NO_PREVIOUS } from '@/domain/trail-hash';

/*
 * The folded state of each job by the hash of its head. It is a memory, never the record: whatever is held here
 * is only used while the head in the table is the same, and is folded anew from the entries otherwise.
 */

/** How far a tablet has been heard in a job. */
export interface Heard {
  /** Every number up to this one was recorded or refused. */
  number: number;
  /** The last `seq` that an entry of this tablet has in the trail; 0 if none. */
  seq: number;
  /** The `seq` at which the trail last tells of a refusal of this tablet's; 0 if none. */
  refusedSeq: number;
  /** The last `seq` at which an entry of this tablet has a conflict, which the tablet did not know of; 0 if none. */
  conflictSeq: number;
  /** Numbers refused ahead of their turn, which need not be waited for. */
  ahead: ReadonlySet<number>;
}

export const UNHEARD: Heard = { number: 0, seq: 0, refusedSeq: 0, conflictSeq: 0, ahead: new Set() };

/** The name under which the server's own entries stand in a trail. */
export const SERVER_DEVICE = 'server';

/** A job as its entries make it. */
export interface JobFold {
  readonly job: string;
  /** The hash of the plan in force. */
  readonly planHash: string;
  readonly plans: ReadonlyMap<string, Plan>;
  readonly state: JobState;
  readonly seq: number;
  readonly hash: string;
  readonly heard: ReadonlyMap<string, Heard>;
}

const KEPT_IN_MEMORY = 64;
/** How many entries a stored state may be behind; the rest is folded when it is next wanted. */
const STORED_EVERY = 400;

const memories = new WeakMap<Db, Map<string, JobFold>>();

/** Remembers folds once the transaction that made them is committed. */
export function rememberFolds(db: Db, folds: Iterable<JobFold>): void {
  const memory = memoryOf(db);
  for (const fold of folds) {
    memory.delete(fold.job);
    memory.set(fold.job, fold);
  }
  for (const oldest of memory.keys()) {
    if (memory.size <= KEPT_IN_MEMORY) break;
    memory.delete(oldest);
  }
}

/** The job as it stands now; `reader` is the transaction if there is one. Undefined if there is no such job. */
export async function findFold(db: Db, jobId: string, reader: Db = db): Promise<JobFold | undefined> {
  const job = await reader.selectFrom('job').select('plan_hash').where('id', '=', jobId).executeTakeFirst();
  if (job === undefined) return undefined;
  const head = await reader
    .selectFrom('job_entry')
    .select(['seq', 'hash'])
    .where('job_id', '=', jobId)
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
  const remembered = memoryOf(db).get(jobId);
  if (remembered?.hash === (head?.hash ?? NO_PREVIOUS)) return remembered;
  const start = await startFrom(reader, jobId, job.plan_hash, remembered);
  const fold = { ...(await foldOn(reader, start)), planHash: job.plan_hash };
  if (!reader.isTransaction) rememberFolds(db, [fold]);
  return fold;
}

/** The job as it stands now. */
export async function getFold(db: Db, jobId: string, reader: Db = db): Promise<JobFold> {
  const fold = await findFold(db, jobId, reader);
  if (fold === undefined) throw notFound('This job');
  return fold;
}

/** Whether a job ever ran under a plan. */
export async function hadPlan(reader: Db, fold: JobFold, planHash: string): Promise<boolean> {
  if (fold.planHash === planHash || fold.plans.has(planHash)) return true;
  const row = await reader
    .selectFrom('job_entry')
    .select('seq')
    .where('job_id', '=', fold.job)
    .where((eb) => eb(eb.fn('json_extract', ['body', eb.val('$.plan')]), '=', planHash))
    .limit(1)
    .executeTakeFirst();
  return row !== undefined;
}

/** A job before its first entry. */
export function beginFold(job: string, planHash: string, plan: Plan): JobFold {
  return {
    job,
    planHash,
    plans: new Map([[planHash, plan]]),
    state: emptyJob(plan),
    seq: 0,
    hash: NO_PREVIOUS,
    heard: new Map(),
  };
}

/** The fold one recorded entry later. A moved plan is no step of it: fold such a job anew. */
export function foldNext(fold: JobFold, recorded: Recorded, hash: string): JobFold {
  const { device, deviceSeq, seq } = recorded;
  const heard = fold.heard.get(device) ?? UNHEARD;
  const conflictSeq = recorded.conflict === undefined ? heard.conflictSeq : seq;
  return {
    ...fold,
    state: applyEntry(fold.state, recorded),
    seq,
    hash,
    heard: new Map(fold.heard).set(
      device,
      // Past a gap only where the numbers between are lost for good.
      skipAhead({ ...heard, number: Math.max(heard.number, deviceSeq), seq, conflictSeq }),
    ),
  };
}

/** The fold after a refusal that used a number up, or that the trail tells of at `seq`. */
export function noteRefusal(fold: JobFold, device: string, number: number | undefined, seq: number): JobFold {
  const heard = fold.heard.get(device) ?? UNHEARD;
  const ahead =
    number === undefined || number <= heard.number ? heard.ahead : new Set(heard.ahead).add(number);
  return {
    ...fold,
    heard: new Map(fold.heard).set(device, skipAhead({ ...heard, refusedSeq: seq, ahead })),
  };
}

function skipAhead(heard: Heard): Heard {
  if (heard.ahead.size === 0) return heard;
  let { number } = heard;
  while (heard.ahead.has(number + 1)) number += 1;
  if (number === heard.number) return heard;
  const reached = number;
  return { ...heard, number, ahead: new Set([...heard.ahead].filter((one) => one > reached)) };
}

/** Stores the folded states that have run ahead of what is stored of them. */
export async function storeFolds(trx: Trx, folds: Iterable<JobFold>): Promise<void> {
  for (const fold of folds) {
    const stored = await trx
      .selectFrom('job_fold')
      .select('seq')
      .where('job_id', '=', fold.job)
      .executeTakeFirst();
    if (stored !== undefined && fold.seq - stored.seq < STORED_EVERY) continue;
    if (stored === undefined && fold.seq < STORED_EVERY) continue;
    const row = {
      seq: fold.seq,
      head_hash: fold.hash,
      state: JSON.stringify({ ...fold.state, plan: undefined }),
    };
    await trx
      .insertInto('job_fold')
      .values({ job_id: fold.job, ...row })
      .onConflict((conflict) => conflict.column('job_id').doUpdateSet(row))
      .execute();
  }
}

/** Forgets what is stored: a program that starts may have other rules than the one that folded it. */
export async function forgetStoredFolds(db: Db): Promise<void> {
  await db.deleteFrom('job_fold').execute();
}

/** Every entry of a job in order, as it was recorded. */
export async function listRecorded(
  reader: Db,
  jobId: string,
  { after = 0, upTo = Number.MAX_SAFE_INTEGER }: { after?: number; upTo?: number } = {},
): Promise<{ recorded: Recorded; hash: string }[]> {
  const rows = await reader
    .selectFrom('job_entry')
    .select(['body', 'hash'])
    .where('job_id', '=', jobId)
    .where('seq', '>', after)
    .where('seq', '<=', upTo)
    .orderBy('seq')
    .execute();
  return rows.map(({ body, hash }) => ({ recorded: JSON.parse(body) as Recorded, hash }));
}

async function startFrom(
  reader: Db,
  jobId: string,
  planHash: string,
  remembered: JobFold | undefined,
): Promise<JobFold> {
  if (remembered !== undefined && (await isInTrail(reader, jobId, remembered))) return remembered;
  const empty = beginFold(jobId, planHash, await getPlan(reader, planHash));
  const row = await reader.selectFrom('job_fold').selectAll().where('job_id', '=', jobId).executeTakeFirst();
  if (row === undefined || !(await isInTrail(reader, jobId, { seq: row.seq, hash: row.head_hash })))
    return empty;
  const state = { ...(JSON.parse(row.state) as Omit<JobState, 'plan'>), plan: empty.state.plan };
  return { ...empty, state, seq: row.seq, hash: row.head_hash };
}

async function isInTrail(
  reader: Db,
  jobId: string,
  { seq, hash }: { seq: number; hash: string },
): Promise<boolean> {
  const row = await reader
    .selectFrom('job_entry')
    .select('hash')
    .where('job_id', '=', jobId)
    .where('seq', '=', seq)
    .executeTakeFirst();
  return row?.hash === hash;
}

/** Folds what came after; from the very first entry if the plan was moved since. */
async function foldOn(reader: Db, start: JobFold): Promise<JobFold> {
  const later = await listRecorded(reader, start.job, { after: start.seq });
  const moves = later.flatMap(({ recorded }) => (recorded.kind === 'plan-moved' ? [recorded.data.to] : []));
  let fold = start;
  if (moves.length === 0) {
    for (const { recorded } of later) fold = { ...fold, state: applyEntry(fold.state, recorded) };
  } else {
    fold = await foldWhole(reader, start);
  }
  const last = later.at(-1);
  return {
    ...fold,
    seq: last?.recorded.seq ?? start.seq,
    hash: last?.hash ?? start.hash,
    heard: await readHeard(reader, start.job),
  };
}

async function foldWhole(reader: Db, start: JobFold): Promise<JobFold> {
  const all = (await listRecorded(reader, start.job)).map(({ recorded }) => recorded);
  const plans = new Map(start.plans);
  for (const hash of all.flatMap((one) =>
    one.kind === 'plan-moved' ? [one.plan, one.data.to] : [one.plan],
  )) {
    if (!plans.has(hash)) plans.set(hash, await getPlan(reader, hash));
  }
  return { ...start, plans, state: replay(plans, all) };
}

/** How far each tablet has been heard, from the entries recorded and refused. */
async function readHeard(reader: Db, jobId: string): Promise<ReadonlyMap<string, Heard>> {
  const recorded = await reader
    .selectFrom('job_entry')
    .select(({ fn }) => ['device_id', fn.max('device_seq').as('number'), fn.max('seq').as('seq')])
    .where('job_id', '=', jobId)
    .groupBy('device_id')
    .execute();
  const heard = new Map<string, Heard>(
    recorded.map((row) => [row.device_id ?? SERVER_DEVICE, { ...UNHEARD, number: row.number, seq: row.seq }]),
  );
  for (const { device, seq } of await readConflicts(reader, jobId)) {
    const before = heard.get(device);
    if (before !== undefined) heard.set(device, { ...before, conflictSeq: seq });
  }
  const refused = await reader
    .selectFrom('refused_entry')
    .leftJoin('job_entry', (join) =>
      join
        .onRef('job_entry.job_id', '=', 'refused_entry.job_id')
        .on('job_entry.kind', '=', 'refused')
        .onRef('job_entry.id', '=', 'refused_entry.id'),
    )
    .select(['refused_entry.device_id', 'refused_entry.device_seq', 'job_entry.seq'])
    .where('refused_entry.job_id', '=', jobId)
    .where('refused_entry.device_id', 'is not', null)
    .orderBy('refused_entry.device_seq')
    .execute();
  for (const row of refused) {
    const device = row.device_id ?? SERVER_DEVICE;
    const before = heard.get(device) ?? UNHEARD;
    const isAhead = row.device_seq !== null && row.device_seq > before.number;
    const ahead = isAhead ? new Set(before.ahead).add(row.device_seq ?? 0) : before.ahead;
    heard.set(device, skipAhead({ ...before, ahead, refusedSeq: Math.max(before.refusedSeq, row.seq ?? 0) }));
  }
  return heard;
}

/** The last entry with a conflict of each tablet. In canonical JSON only the field itself can read like this. */
async function readConflicts(reader: Db, jobId: string): Promise<{ device: string; seq: number }[]> {
  const rows = await reader
    .selectFrom('job_entry')
    .select(({ fn }) => ['device_id', fn.max('seq').as('seq')])
    .where('job_id', '=', jobId)
    .where('body', 'like', '%"conflict":{%')
    .groupBy('device_id')
    .execute();
  return rows.map(({ device_id, seq }) => ({ device: device_id ?? SERVER_DEVICE, seq }));
}

function memoryOf(db: Db): Map<string, JobFold> {
  const memory = memories.get(db) ?? new Map<string, JobFold>();
  memories.set(db, memory);
  return memory;
}

/** Whether anything came into the trail after `basis` that this tablet did not do itself. */
export function isBehind(fold: JobFold, device: string, basis: number): boolean {
  for (const [other, heard] of fold.heard) {
    if (other === device ? isUnlike(heard, basis) : other !== SERVER_DEVICE && heard.seq > basis) return true;
  }
  return false;
}

/** Whether the trail holds something of a tablet after `basis` otherwise than the tablet itself has it. */
function isUnlike({ refusedSeq, conflictSeq }: Heard, basis: number): boolean {
  return refusedSeq > basis || conflictSeq > basis;
}
