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
export async function whyWaitForKey(
  batch: Batch,
  fold: JobFold,
  entry: Entry,
): Promise<{ code: 'key-lost' | 'person-lost'; why: string } | undefined> {
  if (!tellsOfRestore(batch, fold)) return undefined;
  // A lost tablet enrols nobody: what would have to come from it is not waited for.
  const lost = await findLost(batch.trx, [entry.device]);
  if (lost.has(entry.device)) return undefined;
  const { name } = entry.author;
  const { people } = batch.history.at(batch.history.seq);
  if (people.some(({ id }) => id === entry.by)) {
    const why = `The server was restored from a backup that is older than the key of ${name} on the tablet that made this. It waits there.`;
    return { code: 'key-lost', why };
  }
  const why = `The server was restored from a backup that is older than ${name}'s place in the workshop. This stays on the tablet, and goes in only if a newer backup is restored. For what is done from now on the owner adds ${name} again under People.`;
  return { code: 'person-lost', why };
}

/** A data folder that was put back by hand has only the tablets' word for it. */
function tellsOfRestore({ history, lostViews }: Batch, { job, state }: JobFold): boolean {
  const isNoted = () => state.unstepped.some(({ kind }) => kind === 'restored');
  return history.restoredAt !== null || lostViews.has(job) || isNoted();
}
