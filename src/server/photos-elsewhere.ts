import { sql } from 'kysely';
import { photosOf } from '@/domain/job-photos';
import type { JobState } from '@/domain/job-state';
import type { Actor } from './actor';
import type { Db } from './database';
import { selectVisibleJobs } from './job-access';

/** A picture of one job that other jobs show as well, byte for byte. */
export interface PhotographElsewhere {
  hash: string;
  /** The jobs among them that the person may see, by number. */
  jobs: { id: string; number: string }[];
  /** How many jobs more there are that this person may not see. */
  others: number;
}

/** The photographs of a job whose very bytes stand in other jobs too. */
export async function listPhotographsElsewhere(
  db: Db,
  actor: Actor,
  job: string,
  state: JobState,
): Promise<PhotographElsewhere[]> {
  const hashes = [...new Set(photosOf(state).map(({ hash }) => hash))];
  if (hashes.length === 0) return [];
  // As the index on the photographs of all jobs has it.
  const photo = sql<string>`json_extract(body, '$.data.photo')`;
  const rows = await db
    .selectFrom('job_entry')
    .select(['job_id', photo.as('hash')])
    .distinct()
    .where('kind', '=', 'photographed')
    .where(photo, 'in', hashes)
    .where('job_id', '<>', job)
    .execute();
  if (rows.length === 0) return [];
  const visible = await selectVisibleJobs(db, actor)
    .where('job.id', 'in', [...new Set(rows.map(({ job_id }) => job_id))])
    .orderBy('job.number')
    .execute();
  return hashes.flatMap((hash) => {
    const found = new Set(rows.filter((row) => row.hash === hash).map(({ job_id }) => job_id));
    if (found.size === 0) return [];
    const jobs = visible.filter(({ id }) => found.has(id)).map(({ id, number }) => ({ id, number }));
    return [{ hash, jobs, others: found.size - jobs.length }];
  });
}
