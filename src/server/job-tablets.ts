import type { Db } from './database';

/** A tablet that has a part in a job. */
export interface JobTablet {
  id: string;
  name: string;
  state: 'active' | 'lost';
  /** When the server last heard of it at all. */
  lastHeardAt: string | null;
  /** When what it recorded in this job last arrived. */
  lastRecordedAt: string;
}

/** The tablets that recorded in each of these jobs, the last first; ask it of jobs that the asker may see. */
export async function listJobTablets(
  db: Db,
  jobs: readonly string[],
): Promise<ReadonlyMap<string, JobTablet[]>> {
  if (jobs.length === 0) return new Map();
  const rows = await db
    .selectFrom('job_entry')
    .innerJoin('device', 'device.id', 'job_entry.device_id')
    .select(({ fn }) => [
      'job_entry.job_id as job',
      'device.id',
      'device.name',
      'device.state',
      'device.last_heard_at as lastHeardAt',
      fn.max('job_entry.recorded_at').as('lastRecordedAt'),
    ])
    .where('job_entry.job_id', 'in', jobs)
    .groupBy(['job_entry.job_id', 'device.id'])
    .orderBy('lastRecordedAt', 'desc')
    .execute();
  const tablets = new Map<string, JobTablet[]>();
  for (const { job, ...tablet } of rows) tablets.set(job, [...(tablets.get(job) ?? []), tablet]);
  return tablets;
}
