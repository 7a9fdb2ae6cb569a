import { dayIn } from '@/domain/time-words';
import { findStep } from '@/domain/plan';
import { type Actor, requireRole } from './actor';
import { type Calibration, listCalibrations } from './calibrations';
import type { Db } from './database';
import { getPlan } from './plans';
import { readTool } from './tool-rows';
import { getWorkshopDetails } from './workshop';

/** A step of a job in which a tool was used. */
interface UsedIn {
  /** Null where it was taken in hand beside any step. */
  step: string | null;
  title: string;
  entries: number;
  lastAt: string;
}

/** The time between two good calibrations, both days counted in; null where there was none. */
interface Period {
  since: string | null;
  until: string | null;
}

/** What was done with a tool in one period, job by job. */
export interface ToolUsePeriod extends Period {
  jobs: { job: string; number: string; steps: UsedIn[] }[];
}

/** The entries that name the tool that they were done with. */
const KINDS_WITH_TOOL = ['tightened', 'tool-taken', 'read'];

/**
 * What was done with a tool since its last good calibration, and before that in every period in which one failed,
 * the newest first: what has to be looked at again.
 */
export async function readToolUse(db: Db, actor: Actor, id: string): Promise<{ periods: ToolUsePeriod[] }> {
  requireRole(actor, 'supervisor', 'quality lead', 'auditor', 'owner');
  await readTool(db, id);
  const asked = periodsOf(await listCalibrations(db, id));
  const { zone } = await getWorkshopDetails(db);
  const rows = (await selectUses(db, id)).map((row) => ({ ...row, day: dayIn(zone, row.at) }));
  const periods: ToolUsePeriod[] = [];
  for (const { since, until } of asked) {
    const within = rows.filter(
      ({ day }) => (since === null || day >= since) && (until === null || day <= until),
    );
    periods.push({ since, until, jobs: await groupUses(db, within) });
  }
  return { periods };
}

function periodsOf(newestFirst: readonly Calibration[]): Period[] {
  const periods: Period[] = [];
  let until: string | null = null;
  let hasFailed = false;
  for (const { on, verdict } of newestFirst) {
    if (verdict === 'failed') {
      hasFailed = true;
      continue;
    }
    if (until === null || hasFailed) periods.push({ since: on, until });
    until = on;
    hasFailed = false;
  }
  if (until === null || hasFailed) periods.push({ since: null, until });
  return periods;
}

async function groupUses(db: Db, rows: readonly UseRow[]): Promise<ToolUsePeriod['jobs']> {
  const jobs = new Map<string, { job: string; number: string; steps: Map<string | null, UsedIn> }>();
  for (const row of rows) {
    const job = jobs.get(row.job) ?? {
      ...{ job: row.job, number: row.number },
      steps: new Map<string | null, UsedIn>(),
    };
    jobs.set(row.job, job);
    const { entries = 0 } = job.steps.get(row.step) ?? {};
    const title = await titleOf(db, row);
    job.steps.set(row.step, { step: row.step, title, entries: entries + 1, lastAt: row.at });
  }
  return [...jobs.values()].map((job) => ({ ...job, steps: [...job.steps.values()] }));
}

interface UseRow {
  job: string;
  number: string;
  step: string | null;
  plan: string;
  at: string;
}

function selectUses(db: Db, tool: string): Promise<UseRow[]> {
  return db
    .selectFrom('job_entry')
    .innerJoin('job', 'job.id', 'job_entry.job_id')
    .select((eb) => [
      'job.id as job',
      'job.number',
      'job_entry.step',
      'job_entry.at',
      eb.fn<string>('json_extract', ['job_entry.body', eb.val('$.plan')]).as('plan'),
    ])
    .where('job_entry.kind', 'in', KINDS_WITH_TOOL)
    .where((eb) => eb(eb.fn<string>('json_extract', ['body', eb.val('$.data.tool.id')]), '=', tool))
    .orderBy('job.number')
    .orderBy('job_entry.seq')
    .execute();
}

async function titleOf(db: Db, { step, plan }: UseRow): Promise<string> {
  if (step === null) return 'taken in hand';
  return findStep(await getPlan(db, plan), step)?.title ?? step;
}
