import type { Entry } from '@/domain/entry';
import type { JobFold } from './job-fold';
import { findLost } from './lost-tablets';
import type { Batch } from './sync-batch';

/*
 * A server that was restored from a backup has forgotten the tablets and keys that were enrolled since. Nothing is
 * ever taken on a key that it does not know; but what is signed with one waits on its tablet instead of being
 * refused for good, until the author's own session on that tablet enrols the same key again.
 */

/** Why an entry whose key is not known waits; undefined if that key can't be one that a restore took back. */
export async function whyWaitForKey(batch: Batch, fold: JobFold, entry: Entry): Promise<string | undefined> {
  if (!tellsOfRestore(batch, fold)) return undefined;
  // A lost tablet enrols nobody: what would have to come from it is not waited for.
  const lost = await findLost(batch.trx, [entry.device]);
  if (lost.has(entry.device)) return undefined;
  return `The server was restored from a backup that is older than the key of ${entry.author.name} on the tablet that made this. It waits there.`;
}

/** A data folder that was put back by hand has only the tablets' word for it. */
function tellsOfRestore({ history, lostViews }: Batch, { job, state }: JobFold): boolean {
  const isNoted = () => state.unstepped.some(({ kind }) => kind === 'restored');
  return history.restoredAt !== null || lostViews.has(job) || isNoted();
}
