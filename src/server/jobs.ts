import { nextSteps, progressOf, type PhaseProgress } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import { type Actor, requireRole } from './actor';
import type { Asker } from './asker';
import type { App } from './compose';
import { pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { getVisibleJob, selectVisibleJobs } from './job-access';
import { getFold } from './job-fold';
import { readIdentity, readRegistrations } from './job-identity';
import type { JobRow } from './job-rows';
import { type JobTablet, listJobTablets } from './job-tablets';
import { listPhotographsElsewhere, type PhotographElsewhere } from './photos-elsewhere';
import { listMissingPhotographs, type MissingPhotograph } from './photos-missing';

const PAGE = 25;

export interface PersonName {
  id: string;
  name: string;
}

/** One line of a list of jobs. */
export interface JobLine {
  id: string;
  number: string;
  label: string;
  engine: string;
  registration?: string | undefined;
  state: JobRow['state'];
  phase: JobState['phase'];
  plan: string;
  head: { seq: number; hash: string };
  openedAt: string;
  promisedOn?: string | undefined;
  /** Who was put on the job. */
  people: PersonName[];
  done: number;
  total: number;
  /** The phase in which the next step lies. */
  at?: string | undefined;
  next?: { step: string; title: string } | undefined;
  /** Hold points that could be signed now. */
  waiting: { step: string; holdPoint: string; title: string }[];
  /** Open deviations that bar something. */
  blocks: number;
  working?: { name: string; since: string } | undefined;
  lastAt?: string | undefined;
}

/** Jobs that the person may see, the newest first, a page at a time. */
export async function listJobs(
  db: Db,
  actor: Actor,
  { cursor, state }: { cursor?: string | undefined; state?: JobRow['state'] | undefined },
): Promise<{ jobs: JobLine[]; cursor?: string }> {
  let query = selectVisibleJobs(db, actor)
    .orderBy('job.opened_at', 'desc')
    .orderBy('job.id', 'desc')
    .limit(PAGE + 1);
  if (state !== undefined) query = query.where('job.state', '=', state);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('job.opened_at', 'job.id'), '<', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), PAGE, ({ opened_at, id }) => [opened_at, id]);
  return { jobs: await toLines(db, rows), ...next };
}

/** The open jobs, as tablets keep them: no contact data. */
export async function listOpenJobs(db: Db, asker: Asker): Promise<JobLine[]> {
  const rows = await selectVisibleJobs(db, asker)
    .where('job.state', 'in', ['open', 'parked'])
    .orderBy('job.opened_at')
    .execute();
  return toLines(db, rows);
}

/** Everything that the page of a job shows. */
export interface JobSummary extends JobLine {
  openedBy: PersonName;
  note?: string | undefined;
  oldParts?: string | undefined;
  optionWords: { ask: string; answer: string }[];
  progress: PhaseProgress[];
  /** The values that this person may see. */
  identity: Record<string, string>;
  /** Fields that are known and not for this person. */
  withheld: string[];
  /** Photographs of the record whose bytes have not come. */
  missingPhotographs: MissingPhotograph[];
  /** Photographs whose very bytes stand in other jobs too. */
  photographsElsewhere: PhotographElsewhere[];
  /** The tablets that recorded in the job, the last first. */
  tablets: JobTablet[];
  jobState: JobState;
}

/** One job that the person may see. */
export async function getJob(app: App, actor: Actor, id: string): Promise<JobSummary> {
  const { db } = app;
  const row = await getVisibleJob(db, actor, id);
  const [line] = await toLines(db, [row]);
  if (line === undefined) throw new RangeError('A job has a line.');
  const { state } = await getFold(db, id);
  const { known, withheld } = await readIdentity(db, actor, id);
  const names = await readNames(db, [row.opened_by]);
  return {
    ...line,
    openedBy: { id: row.opened_by, name: names.get(row.opened_by) ?? row.opened_by },
    note: row.note ?? undefined,
    oldParts: oldPartsOf(state),
    optionWords: state.plan.optionWords,
    progress: progressOf(state),
    identity: Object.fromEntries(Object.entries(known).map(([field, { value }]) => [field, value])),
    withheld,
    missingPhotographs: await listMissingPhotographs(app, state),
    photographsElsewhere: await listPhotographsElsewhere(db, actor, id, state),
    tablets: (await listJobTablets(db, [id])).get(id) ?? [],
    jobState: state,
  };
}

/** Puts people on a job, in place of those who were on it. */
export async function setJobPeople(
  trx: Trx,
  actor: Actor,
  id: string,
  people: readonly string[],
): Promise<void> {
  requireRole(actor, 'supervisor', 'owner');
  await getVisibleJob(trx, actor, id);
  const wanted = [...new Set(people)];
  const known = await trx.selectFrom('person').select('id').where('active', '=', 1).execute();
  const unknown = wanted.findIndex((person) => !known.some((row) => row.id === person));
  if (unknown >= 0) {
    throw new AppError('invalid-field', 'The workshop has no such person at work.', {
      field: `people.${unknown}`,
    });
  }
  await trx.deleteFrom('job_person').where('job_id', '=', id).execute();
  if (wanted.length === 0) return;
  await trx
    .insertInto('job_person')
    .values(wanted.map((person) => ({ job_id: id, person_id: person })))
    .execute();
}

async function toLines(db: Db, rows: readonly JobRow[]): Promise<JobLine[]> {
  const ids = rows.map(({ id }) => id);
  const registrations = await readRegistrations(db, ids);
  const people = await readPeople(db, ids);
  const lines: JobLine[] = [];
  for (const row of rows) {
    const { state, seq, hash } = await getFold(db, row.id);
    lines.push({
      id: row.id,
      number: row.number,
      label: row.vehicle_label,
      engine: state.plan.engine.name,
      registration: registrations.get(row.id),
      state: row.state,
      plan: row.plan_hash,
      head: { seq, hash },
      openedAt: row.opened_at,
      promisedOn: row.promised_on ?? undefined,
      people: people.get(row.id) ?? [],
      ...describe(state),
    });
  }
  return lines;
}

function describe(
  state: JobState,
): Pick<JobLine, 'phase' | 'done' | 'total' | 'at' | 'next' | 'waiting' | 'blocks' | 'working' | 'lastAt'> {
  const progress = progressOf(state);
  const steps = nextSteps(state);
  const [next] = steps;
  return {
    phase: state.phase,
    done: progress.reduce((sum, { done }) => sum + done, 0),
    total: progress.reduce((sum, { total }) => sum + total, 0),
    at: state.plan.phases.find(({ id }) => id === next?.phase)?.name,
    next: next && { step: next.id, title: next.title },
    waiting: steps.flatMap((step) =>
      step.kind === 'hold' ? [{ step: step.id, holdPoint: step.holdPoint, title: step.title }] : [],
    ),
    blocks: state.deviations.filter((deviation) => deviation.blocks && deviation.disposed === undefined)
      .length,
    working: state.working && { name: state.working.name, since: state.working.since },
    lastAt: state.lastAt,
  };
}

function oldPartsOf(state: JobState): string | undefined {
  const opened = state.unstepped.find((kept) => kept.kind === 'opened');
  return opened !== undefined && 'oldParts' in opened.data ? opened.data.oldParts : undefined;
}

async function readPeople(db: Db, jobs: readonly string[]): Promise<ReadonlyMap<string, PersonName[]>> {
  if (jobs.length === 0) return new Map();
  const rows = await db
    .selectFrom('job_person')
    .innerJoin('person', 'person.id', 'job_person.person_id')
    .select(['job_id', 'person.id', 'printed_name'])
    .where('job_id', 'in', jobs)
    .orderBy('printed_name')
    .execute();
  const people = new Map<string, PersonName[]>();
  for (const { job_id, id, printed_name: name } of rows) {
    people.set(job_id, [...(people.get(job_id) ?? []), { id, name }]);
  }
  return people;
}

async function readNames(db: Db, ids: readonly string[]): Promise<ReadonlyMap<string, string>> {
  const rows = await db.selectFrom('person').select(['id', 'printed_name']).where('id', 'in', ids).execute();
  return new Map(rows.map(({ id, printed_name: name }) => [id, name]));
}
