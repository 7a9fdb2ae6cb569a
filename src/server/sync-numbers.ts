import type { Entry } from '@/domain/entry';
import { type JobFold, UNHEARD } from './job-fold';
import { findLost } from './lost-tablets';
import type { Batch } from './sync-batch';

/*
 * A tablet numbers what it makes in a job without gaps, so a number that is missing is waited for. Only that a
 * tablet is declared lost ends the waiting; a number that turns up after later ones is then late, not reused.
 */

/** Where an entry stands in its tablet's numbering. */
export type Place =
  | { kind: 'next' | 'reused' | 'late' }
  /** An earlier number has not come yet and may still come. */
  | { kind: 'waiting'; for: number };

/** Finds out whether an entry is next, waits for an earlier one, comes late, or takes a number a second time. */
export async function placeOf(batch: Batch, fold: JobFold, entry: Entry): Promise<Place> {
  const heard = (fold.heard.get(entry.device) ?? UNHEARD).number;
  if (entry.deviceSeq === heard + 1) return { kind: 'next' };
  if (entry.deviceSeq > heard) {
    const isForGood = await isLostForGood(batch, entry, heard);
    return isForGood ? { kind: 'next' } : { kind: 'waiting', for: heard + 1 };
  }
  return { kind: (await isUsed(batch, entry)) ? 'reused' : 'late' };
}

/** The tablet is lost, and what is missing before this entry does not come with the same push either. */
async function isLostForGood(batch: Batch, entry: Entry, heard: number): Promise<boolean> {
  const comes = batch.pushed.some(
    ({ read }) =>
      read.ok &&
      read.entry.job === entry.job &&
      read.entry.device === entry.device &&
      read.entry.deviceSeq > heard &&
      read.entry.deviceSeq < entry.deviceSeq,
  );
  return !comes && (await findLost(batch.trx, [entry.device])).has(entry.device);
}

/** Whether the tablet's number stands in the job for another entry, recorded or refused. */
async function isUsed({ trx, newEntries, newRefusals }: Batch, entry: Entry): Promise<boolean> {
  const { job, device, deviceSeq } = entry;
  const isNew = [...newEntries, ...newRefusals].some(
    (row) => row.job_id === job && row.device_id === device && row.device_seq === deviceSeq,
  );
  if (isNew) return true;
  const recorded = await trx
    .selectFrom('job_entry')
    .select('id')
    .where('job_id', '=', job)
    .where('device_id', '=', device)
    .where('device_seq', '=', deviceSeq)
    .executeTakeFirst();
  if (recorded !== undefined) return true;
  const refused = await trx
    .selectFrom('refused_entry')
    .select('id')
    .where('job_id', '=', job)
    .where('device_id', '=', device)
    .where('device_seq', '=', deviceSeq)
    .executeTakeFirst();
  return refused !== undefined;
}
