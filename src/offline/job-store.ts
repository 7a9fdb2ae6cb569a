/*
 * What a job looks like here: the fold of its confirmed entries with the fold of the outbox on top. Kept in
 * memory by job and grown by what is new; every tab watches the job's `revision`, which each write raises.
 */
import { liveQuery } from 'dexie';
import type { Entry, Recorded } from '@/domain/entry';
import { applyEntry, emptyJob, replay } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import type { Plan } from '@/domain/plan';
import {
  ofJob,
  type FloorDatabase,
  type JobRow,
  type OutboxRow,
  type RefusedRow,
  type TrailPoint,
} from './database';

/** A job as one screen sees it; a new object whenever anything about it changed. */
export interface JobView {
  job: string;
  row: JobRow;
  /** What guidance stands on: confirmed entries and the outbox. */
  state: JobState;
  /** The confirmed entries alone. */
  confirmed: JobState;
  /** What the server has not given back yet, in order, and where each record is. */
  pending: OutboxRow[];
  /** What the server refused; kept here with the reason. */
  refused: RefusedRow[];
  /** Why nothing can be recorded on the job here for now. */
  stopped?: { code: string; words: string } | undefined;
  /** The last number that this tablet gave out on the job. */
  deviceSeq: number;
}

export interface JobStore {
  /** Reads and folds a job; throws `JobNotHereError` when it or its plan is not on this tablet. */
  open(job: string): Promise<JobView>;
  /** The view as it stands, if the job was opened. */
  get(job: string): JobView | undefined;
  /** Calls back with every new view, in whichever tab the change was made; the answer ends it. */
  subscribe(job: string, listener: (view: JobView) => void): () => void;
  /** Brings the view up to what is on the disk. */
  refresh(job: string): Promise<JobView>;
  /** Takes in rows that were just written on top of `before`, without reading the job again. */
  extend(before: JobView, rows: OutboxRow[], deviceSeq: number): Promise<JobView>;
  /** Stops watching. */
  close(): void;
}

/** The job, or the plan it runs under, has not been made available on this tablet. */
export class JobNotHereError extends Error {
  readonly code: 'job-not-here' | 'plan-not-here';

  constructor(code: 'job-not-here' | 'plan-not-here') {
    super(
      code === 'job-not-here'
        ? 'This job is not on this tablet. Connect it to the network and make the job available offline.'
        : 'The plan of this job is not on this tablet yet. Connect it to the network for a moment.',
    );
    this.name = 'JobNotHereError';
    this.code = code;
  }
}

interface Folded {
  view: JobView;
  plans: ReadonlyMap<string, Plan>;
}

/** A store over one tablet's database. */
export function createJobStore(db: FloorDatabase): JobStore {
  const folded = new Map<string, Folded>();
  const listeners = new Map<string, Set<(view: JobView) => void>>();
  const watches = new Map<string, () => void>();
  const turns = new Map<string, Promise<unknown>>();

  /** One reading of a job at a time, so that an older one never replaces a newer one. */
  function inTurn<T>(job: string, work: () => Promise<T>): Promise<T> {
    const turn = (turns.get(job) ?? Promise.resolve()).then(work, work);
    turns.set(job, turn);
    return turn;
  }

  function keep(job: string, next: Folded): JobView {
    folded.set(job, next);
    for (const listener of listeners.get(job) ?? []) listener(next.view);
    return next.view;
  }

  function refresh(job: string): Promise<JobView> {
    return inTurn(job, async () => {
      const present = folded.get(job);
      const next = await readJob(db, job, present);
      return next === present ? next.view : keep(job, next);
    });
  }

  function watch(job: string): void {
    if (watches.has(job)) return;
    const watched = liveQuery(() => db.jobs.get(job)).subscribe((row) => {
      // A job that can't be read now is told to whoever opens it; the watch itself has nobody to tell.
      if (row && row.revision !== folded.get(job)?.view.row.revision) refresh(job).catch(() => undefined);
    });
    watches.set(job, () => watched.unsubscribe());
  }

  return {
    async open(job) {
      const view = await refresh(job);
      watch(job);
      return view;
    },
    get: (job) => folded.get(job)?.view,
    subscribe(job, listener) {
      const set = listeners.get(job) ?? new Set();
      listeners.set(job, set.add(listener));
      return () => set.delete(listener);
    },
    refresh,
    extend(before, rows, deviceSeq) {
      const present = folded.get(before.job);
      if (present?.view !== before) return refresh(before.job);
      const row = { ...before.row, revision: before.row.revision + 1 };
      const pending = [...before.pending, ...rows];
      const state = foldOn(
        before.state,
        rows.map(({ entry }) => entry),
      );
      if (!state) return refresh(before.job);
      return Promise.resolve(
        keep(before.job, { ...present, view: { ...before, row, pending, state, deviceSeq } }),
      );
    },
    close() {
      for (const stop of watches.values()) stop();
      watches.clear();
      listeners.clear();
    },
  };
}

type JobRows = Awaited<ReturnType<typeof readRows>>;

/** Everything of a job, read at one moment; of the confirmed entries only those after `from`, if it still holds. */
async function readRows(db: FloorDatabase, job: string, from: TrailPoint | null) {
  return db.transaction('r', [db.jobs, db.entries, db.outbox, db.refused, db.counters], async () => {
    const row = await db.jobs.get(job);
    if (!row) throw new JobNotHereError('job-not-here');
    const last = from === null ? undefined : await db.entries.get([job, from.seq]);
    // A restored server may have taken entries back: then what was folded before is worth nothing.
    const grows = last !== undefined && last.hash === from?.hash;
    const [entries, pending, refused, counter] = await Promise.all([
      ofJob(db.entries, job, grows ? last.seq : undefined).toArray(),
      ofJob(db.outbox, job).toArray(),
      db.refused.where('job').equals(job).toArray(),
      db.counters.get(job),
    ]);
    return { row, grows, entries, pending, refused, deviceSeq: counter?.deviceSeq ?? 0 };
  });
}

async function readJob(db: FloorDatabase, job: string, present: Folded | undefined): Promise<Folded> {
  const rows = await readRows(db, job, present?.view.row.have ?? null);
  if (rows.row.revision === present?.view.row.revision) return present;
  const grown = present && rows.grows ? grow(present, rows) : undefined;
  if (grown) return toFolded(rows, grown);
  const whole = rows.grows ? await readRows(db, job, null) : rows;
  return toFolded(whole, await foldWhole(db, whole));
}

function toFolded({ row, pending, refused, deviceSeq }: JobRows, { plans, confirmed, state }: Fold): Folded {
  const { id: job, stopped } = row;
  return { plans, view: { job, row, state, confirmed, pending, refused, stopped, deviceSeq } };
}

interface Fold {
  plans: Folded['plans'];
  confirmed: JobState;
  state: JobState;
}

/** What was folded before, with what is new; undefined where the plan moved and all of it is folded again. */
function grow({ plans, view }: Folded, rows: JobRows): Fold | undefined {
  const confirmed = foldOn(view.confirmed, recordedIn(rows));
  const state = confirmed && foldOn(confirmed, madeIn(rows));
  return state && { plans, confirmed, state };
}

async function foldWhole(db: FloorDatabase, rows: JobRows): Promise<Fold> {
  const recorded = recordedIn(rows);
  const made = madeIn(rows);
  const plans = await readPlans(db, rows.row.plan, [...recorded, ...made]);
  const confirmed = foldAll(plans, rows.row.plan, recorded);
  return { plans, confirmed, state: foldOn(confirmed, made) ?? replay(plans, [...recorded, ...made]) };
}

function recordedIn(rows: JobRows): Recorded[] {
  return rows.entries.map((row) => row.recorded);
}

function madeIn(rows: JobRows): Entry[] {
  return rows.pending.map((row) => row.entry);
}

/** The fold of more entries onto a state; undefined where one moves the plan, which only a whole fold knows. */
function foldOn(state: JobState, entries: readonly (Entry | Recorded)[]): JobState | undefined {
  if (entries.some((entry) => entry.kind === 'plan-moved')) return undefined;
  return entries.reduce(applyEntry, state);
}

function foldAll(
  plans: ReadonlyMap<string, Plan>,
  planHash: string,
  entries: (Entry | Recorded)[],
): JobState {
  if (entries.length > 0) return replay(plans, entries);
  const plan = plans.get(planHash);
  if (!plan) throw new JobNotHereError('plan-not-here');
  return emptyJob(plan);
}

/** The plans that the entries were made under or moved to; all of them must be here. */
async function readPlans(
  db: FloorDatabase,
  planHash: string,
  entries: readonly Entry[],
): Promise<Map<string, Plan>> {
  const wanted = plansNeeded(planHash, entries);
  const rows = await db.plans.bulkGet(wanted);
  const plans = new Map<string, Plan>();
  for (const row of rows) if (row) plans.set(row.hash, row.plan);
  if (plans.size < wanted.length) throw new JobNotHereError('plan-not-here');
  return plans;
}

/** Hashes of the plans that a fold of these entries asks for. */
export function plansNeeded(planHash: string, entries: readonly Entry[]): string[] {
  const [first] = entries;
  const moved = entries.flatMap((entry) => (entry.kind === 'plan-moved' ? [entry.data.to] : []));
  return [...new Set([first?.plan ?? planHash, ...moved])];
}
