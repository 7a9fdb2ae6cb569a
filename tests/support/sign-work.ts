/* On a tablet with real records: people sign for the work that they did. */
import { unsignedUnder } from '@/domain/job-signing-rules';
import { unsignedWork } from '@/domain/job-work';
import { findStep } from '@/domain/plan';
import { coverWork } from '@/offline/evidence';
import type { Offline } from '@/offline/offline';
import { recordEntries } from '@/offline/record';

/** A person signs for all that they recorded on a job and have not signed for yet. */
export async function signWorkOf(offline: Offline, job: string, by: string): Promise<void> {
  const view = offline.jobs.get(job) ?? (await offline.jobs.open(job));
  if (unsignedWork(view.state, by).length === 0) return;
  const covers = await coverWork(offline, view, by);
  const outcome = await recordEntries(offline, job, [{ kind: 'work-signed', data: { covers } }], { by });
  if (!outcome.ok) throw new Error(outcome.why);
}

/** Everybody whose work a hold point covers signs for it; each needs their key on this tablet. */
export async function signWorkUnder(offline: Offline, job: string, holdStep: string): Promise<void> {
  const { state } = offline.jobs.get(job) ?? (await offline.jobs.open(job));
  const step = findStep(state.plan, holdStep);
  const workshop = await offline.db.workshop.get('workshop');
  if (step?.kind !== 'hold' || !workshop) throw new Error(`${holdStep} can't be signed here`);
  for (const { by } of unsignedUnder(state, step, workshop)) await signWorkOf(offline, job, by);
}
