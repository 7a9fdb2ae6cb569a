/*
 * Bringing what work without a network needs: the workshop's people and tools, the list of jobs, and for a
 * job its plan and its trail.
 */
import * as z from 'zod/mini';
import type { Plan } from '@/domain/plan';
import { NO_PREVIOUS } from '@/domain/trail-hash';
import { changeJob, ofJob, type FloorDatabase, type JobRow, type WorkshopRow } from './database';
import { documentHash } from './hashing';
import { plansNeeded } from './job-store';
import { callServer, type Outcome, type Trouble } from './server-call';
import type { Surroundings } from './surroundings';

const nullableText = z.nullable(z.string());

const workshopAnswer = z.object({
  seq: z.int(),
  restoredAt: z.optional(nullableText),
  name: z.string(),
  zone: z.string(),
  people: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      roles: z.array(z.string()),
      active: z.boolean(),
      hasPin: z.boolean(),
      certificate: z.optional(z.nullable(z.object({ number: z.string(), kind: z.string() }))),
      authorisedUntil: z.optional(nullableText),
    }),
  ),
  tools: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      kind: z.string(),
      serial: z.string(),
      rangeLow: nullableText,
      rangeHigh: nullableText,
      unit: nullableText,
      dueOn: nullableText,
      state: z.enum(['in use', 'withdrawn']),
      cycleLimit: z.nullable(z.int()),
      cyclesUsed: z.nullable(z.int()),
      failure: z.optional(nullableText),
    }),
  ),
  sealingKey: z.object({ id: z.string(), publicKey: z.string() }),
  secondUnits: z.optional(z.enum(['none', 'inch and pound'])),
});

/** Brings the workshop's people, tools and sealing key. */
export async function pullWorkshop(s: Surroundings): Promise<Outcome> {
  const answer = await callServer(s, { path: '/api/workshop', answer: workshopAnswer });
  if (!answer.ok) return answer;
  const row: WorkshopRow = { key: 'workshop', ...answer.body };
  await s.db.workshop.put(row);
  return { ok: true };
}

const jobsAnswer = z.object({
  jobs: z.array(
    z.object({
      id: z.string(),
      number: z.string(),
      label: z.string(),
      engine: z.string(),
      registration: z.nullish(z.string()),
      plan: z.string(),
      phase: z.string(),
      head: z.nullish(z.object({ seq: z.int(), hash: z.string() })),
      people: z.array(z.string()),
      promisedOn: z.nullish(z.string()),
      tablets: z.optional(
        z.array(
          z.object({
            id: z.string(),
            name: z.string(),
            lastHeardAt: z.nullable(z.string()),
            lastRecordedAt: z.string(),
          }),
        ),
      ),
    }),
  ),
});

/**
 * Brings the list of open jobs. A job that is no longer on it leaves the tablet's list only if nothing of it
 * is kept here.
 */
export async function pullJobList(s: Surroundings): Promise<Outcome> {
  const answer = await callServer(s, { path: '/api/floor/jobs', answer: jobsAnswer });
  if (!answer.ok) return answer;
  const { db } = s;
  await db.transaction('rw', db.jobs, db.outbox, db.refused, async () => {
    const listed = new Set<string>();
    for (const job of answer.body.jobs) {
      listed.add(job.id);
      const present = await db.jobs.get(job.id);
      await db.jobs.put(listedJob(job, present));
    }
    for (const row of await db.jobs.filter(({ id }) => !listed.has(id)).toArray()) {
      const kept =
        row.availableOffline ||
        (await ofJob(db.outbox, row.id).count()) > 0 ||
        (await db.refused.where('job').equals(row.id).count()) > 0;
      if (!kept) await db.jobs.delete(row.id);
    }
  });
  return { ok: true };
}

function listedJob(
  { registration, promisedOn, head, plan, ...job }: z.infer<typeof jobsAnswer>['jobs'][number],
  present: JobRow | undefined,
): JobRow {
  const facts = {
    ...job,
    registration: registration ?? undefined,
    promisedOn: promisedOn ?? undefined,
    head: head ?? { seq: 0, hash: NO_PREVIOUS },
  };
  // The plan in force follows from the trail that is here, which may be behind the list.
  if (present) return { ...present, ...facts };
  return { ...facts, plan, have: null, availableOffline: false, revision: 0 };
}

/** The jobs that this tablet knows of, by number. */
export async function listJobs(s: Surroundings): Promise<JobRow[]> {
  const rows = await s.db.jobs.toArray();
  return rows.sort((a, b) => a.number.localeCompare(b.number, 'en'));
}

/** Brings the plans that the jobs kept here need; a plan is taken only if it has the hash it is asked by. */
export async function fetchMissingPlans(s: Surroundings): Promise<Outcome> {
  for (const hash of await findMissingPlans(s.db)) {
    const brought = await fetchPlan(s, hash);
    if (!brought.ok) return brought;
  }
  return { ok: true };
}

/** Asked after every sync, so it reads all at once: to go from entry to entry takes a browser far longer. */
function findMissingPlans(db: FloorDatabase): Promise<string[]> {
  return db.transaction('r', db.jobs, db.entries, db.plans, async () => {
    const needed = new Set<string>();
    const jobs = await db.jobs.toArray();
    for (const { id, plan } of jobs.filter(({ availableOffline }) => availableOffline)) {
      const entries = await ofJob(db.entries, id).toArray();
      const moves = entries.filter(({ seq, recorded }) => seq === 1 || recorded.kind === 'plan-moved');
      const recorded = moves.map((row) => row.recorded);
      for (const hash of [plan, ...plansNeeded(plan, recorded)]) needed.add(hash);
    }
    for (const hash of await db.plans.toCollection().primaryKeys()) needed.delete(hash);
    return [...needed];
  });
}

const planAnswer = z.record(z.string(), z.unknown());

async function fetchPlan(s: Surroundings, hash: string): Promise<Outcome> {
  const answer = await callServer(s, { path: `/api/plans/${hash}`, answer: planAnswer });
  if (!answer.ok) return answer;
  if (documentHash(answer.body) !== hash) return WRONG_PLAN;
  const plan = answer.body as unknown as Plan;
  await s.db.transaction('rw', s.db.plans, s.db.jobs, async () => {
    await s.db.plans.put({ hash, plan });
    // Whoever waits to open a job of this plan looks again.
    for (const row of await s.db.jobs.toArray()) if (row.plan === hash) await changeJob(s.db, row.id, {});
  });
  return { ok: true };
}

const WRONG_PLAN: Trouble = {
  ok: false,
  code: 'wrong-plan',
  why: 'The plan that was sent is not the one that the job runs under. It was not taken over. Tell the supervisor.',
};

interface SyncingSurroundings extends Surroundings {
  sync: { now(): Promise<Outcome> };
}

/** Makes one job workable without a network: its plan and its trail to the end. */
export async function makeAvailableOffline(offline: SyncingSurroundings, job: string): Promise<Outcome> {
  return makeAllAvailable(offline, [job]);
}

/** Makes the open jobs that a person works on workable without a network. */
export async function keepOpenJobsOffline(offline: SyncingSurroundings, person: string): Promise<Outcome> {
  const listed = await pullJobList(offline);
  if (!listed.ok) return listed;
  const own = await offline.db.jobs.filter(({ people }) => people.includes(person)).primaryKeys();
  return makeAllAvailable(offline, own);
}

async function makeAllAvailable(offline: SyncingSurroundings, jobs: string[]): Promise<Outcome> {
  const { db } = offline;
  if (!(await db.workshop.get('workshop'))) {
    const workshop = await pullWorkshop(offline);
    if (!workshop.ok) return workshop;
  }
  if ((await db.jobs.where('id').anyOf(jobs).count()) < jobs.length) {
    const listed = await pullJobList(offline);
    if (!listed.ok) return listed;
  }
  await db.transaction('rw', db.jobs, async () => {
    for (const job of jobs) await changeJob(db, job, { availableOffline: true });
  });
  const plans = await fetchMissingPlans(offline);
  if (!plans.ok) return plans;
  const synced = await offline.sync.now();
  if (!synced.ok) return synced;
  const rows = await db.jobs.bulkGet(jobs);
  const stopped = rows.find((row) => !row || row.stopped);
  if (!stopped?.stopped) return rows.includes(undefined) ? NOT_LISTED : { ok: true };
  return { ok: false, code: stopped.stopped.code, why: stopped.stopped.words };
}

const NOT_LISTED: Trouble = {
  ok: false,
  code: 'not-listed',
  why: 'This job is not among the open jobs of the workshop. Look at the list of jobs again.',
};
