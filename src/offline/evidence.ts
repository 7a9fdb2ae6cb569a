import { evidenceFor } from '@/domain/job';
import { evidenceDigest } from '@/domain/job-evidence';
import { unsignedWork } from '@/domain/job-work';
import { sha256OfBytes } from './hashing';
import type { JobView } from './job-store';
import type { Surroundings } from './surroundings';

/** What a signature covers, as the entry carries it. */
export interface Coverage {
  upTo: Record<string, number>;
  count: number;
  digest: string;
}

/** Exactly the evidence of a hold point that this view shows: sign with it what was looked at, nothing later. */
export async function coverageOf({ db }: Surroundings, view: JobView, holdStepId: string): Promise<Coverage> {
  return coverEntries(db, view, evidenceFor(view.state, holdStepId));
}

/** What one person recorded on the job and has not signed as their own work yet. */
export async function coverWork({ db }: Surroundings, view: JobView, person: string): Promise<Coverage> {
  return coverEntries(db, view, unsignedWork(view.state, person));
}

/** The coverage of any set of a job's entries, such as one author's unsigned work. */
export async function coverEntries(
  db: Surroundings['db'],
  { job, pending }: Pick<JobView, 'job' | 'pending'>,
  evidence: readonly { id: string; device: string; deviceSeq: number }[],
): Promise<Coverage> {
  const hashes = new Map(pending.map((row) => [row.id, row.contentHash]));
  const confirmed = await db.entries
    .where('id')
    .anyOf(evidence.map(({ id }) => id).filter((id) => !hashes.has(id)))
    .toArray();
  for (const row of confirmed) if (row.job === job) hashes.set(row.id, row.contentHash);
  const upTo: Record<string, number> = {};
  const digested = evidence.map(({ id, device, deviceSeq }) => {
    upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
    const hash = hashes.get(id);
    if (hash === undefined)
      throw new Error('An entry of the evidence is no longer on this tablet. Reload the page.');
    return hash;
  });
  return { upTo, count: evidence.length, digest: evidenceDigest(digested, sha256OfBytes) };
}
