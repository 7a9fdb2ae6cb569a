import { type Actor, hasRole } from './actor';
import { type Asker, isDevice } from './asker';
import type { Db } from './database';
import { notFound } from './errors';
import type { JobRow } from './job-rows';

/** Whether a person sees every job, or only open ones and those in which they have a part. */
export function seesAllJobs(actor: Actor): boolean {
  return hasRole(actor, 'supervisor', 'quality lead', 'auditor', 'owner');
}

/**
 * The jobs that a person or a tablet may see: those that are open, and those in which they have a part; some
 * people see all.
 */
export function selectVisibleJobs(db: Db, asker: Asker) {
  const jobs = db.selectFrom('job').selectAll('job');
  if (!isDevice(asker) && seesAllJobs(asker)) return jobs;
  return jobs.where((eb) =>
    eb.or([
      eb('job.state', 'in', ['open', 'parked']),
      isDevice(asker)
        ? eb.exists(
            eb
              .selectFrom('job_entry')
              .select('job_entry.seq')
              .whereRef('job_entry.job_id', '=', 'job.id')
              .where('job_entry.device_id', '=', asker.id),
          )
        : eb('job.id', 'in', ownJobs(db, asker)),
    ]),
  );
}

/** Jobs that somebody was put on, or recorded in. */
function ownJobs(db: Db, actor: Actor) {
  return db
    .selectFrom('job_person')
    .select('job_id')
    .where('person_id', '=', actor.personId)
    .union(db.selectFrom('job_entry').select('job_id').where('by_person', '=', actor.personId));
}

/** One job that the person may see; one that they may not reads the same as one that is not there. */
export async function getVisibleJob(db: Db, actor: Actor, id: string): Promise<JobRow> {
  const job = await selectVisibleJobs(db, actor).where('job.id', '=', id).executeTakeFirst();
  if (job === undefined) throw notFound('This job');
  return job;
}

/** A job that the person may read whole, with its trail: technicians only those in which they have a part. */
export async function getReadableJob(db: Db, actor: Actor, id: string): Promise<JobRow> {
  const job = await getVisibleJob(db, actor, id);
  if (seesAllJobs(actor)) return job;
  const own = await db
    .selectFrom(ownJobs(db, actor).as('own'))
    .select('job_id')
    .where('job_id', '=', id)
    .executeTakeFirst();
  if (own === undefined) throw notFound('The trail of this job');
  return job;
}
