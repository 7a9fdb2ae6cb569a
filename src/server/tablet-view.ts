import type { Entry, Recorded } from '@/domain/entry';
import { applyEntry, emptyJob, replay } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import { contentOf } from '@/domain/trail-hash';
import type { JobFold } from './job-fold';
import { getPlan } from './plans';
import type { Batch, TabletView } from './sync-batch';

/*
 * What a tablet saw when an entry was made on it: the trail up to the entry's basis, and after that only what
 * this tablet did itself. What was in order there happened, whatever came in from elsewhere meanwhile.
 */

/**
 * Refusals that a tablet could not foresee: it went on from such an entry in good faith, so its later entries
 * are judged as if that one stood.
 */
export const UNFORESEEN = [
  'evidence-changed',
  'overtaken',
  'pin-wrong',
  'pin-unreadable',
  'pin-none-set',
] as const;

/** The job as the entry's tablet saw it just before. */
export async function tabletView(batch: Batch, fold: JobFold, entry: Entry): Promise<JobState> {
  const key = `${entry.job} ${entry.device} ${entry.basis}`;
  const held = batch.views.get(key);
  const start =
    held !== undefined && held.number < entry.deviceSeq ? held : await readView(batch, fold, entry);
  const view = actsOf(batch, entry)
    .filter((act) => act.deviceSeq > start.number && act.deviceSeq < entry.deviceSeq)
    .reduce<TabletView>(
      ({ state }, act) => ({ state: applyEntry(state, act), number: act.deviceSeq }),
      start,
    );
  batch.views.set(key, view);
  return view.state;
}

/** Notes what a tablet did, for the view that its next entries were made in. */
export function noteAct(batch: Batch, entry: Entry): void {
  const key = `${entry.job} ${entry.device}`;
  const acts = batch.acts.get(key);
  if (acts === undefined) batch.acts.set(key, [entry]);
  else acts.push(entry);
}

function actsOf(batch: Batch, entry: Entry): readonly Entry[] {
  return batch.acts.get(`${entry.job} ${entry.device}`) ?? [];
}

/** The view as far as the tables tell it; this push's own part is added by the caller. */
async function readView(batch: Batch, fold: JobFold, entry: Entry): Promise<TabletView> {
  const seen = await readSeen(batch, entry);
  const own = await readOwnAfter(batch, entry);
  const entries = [...seen, ...own];
  const number = entries.reduce(
    (last, { device, deviceSeq }) => (device === entry.device ? Math.max(last, deviceSeq) : last),
    0,
  );
  const [first] = entries;
  if (first === undefined) return { state: emptyJob(fold.state.plan), number };
  const plans = new Map(fold.plans);
  if (!plans.has(first.plan)) plans.set(first.plan, await getPlan(batch.trx, first.plan));
  return { state: replay(plans, entries), number };
}

async function readSeen(batch: Batch, { job, basis }: Entry): Promise<Recorded[]> {
  const stored = await batch.trx
    .selectFrom('job_entry')
    .select(['seq', 'body'])
    .where('job_id', '=', job)
    .where('seq', '<=', basis)
    .orderBy('seq')
    .execute();
  const added = batch.newEntries.filter((row) => row.job_id === job && row.seq <= basis);
  return [...stored, ...added].map(({ body }) => JSON.parse(body) as Recorded);
}

/** This tablet's own entries past the basis, those included that were refused later than it could know. */
async function readOwnAfter(batch: Batch, { job, device, basis, deviceSeq }: Entry): Promise<Entry[]> {
  const recorded = await batch.trx
    .selectFrom('job_entry')
    .select('body')
    .where('job_id', '=', job)
    .where('device_id', '=', device)
    .where('seq', '>', basis)
    .where('device_seq', '<', deviceSeq)
    .execute();
  const refused = await batch.trx
    .selectFrom('refused_entry')
    .innerJoin('job_entry', 'job_entry.id', 'refused_entry.id')
    .select('refused_entry.body')
    .where('refused_entry.job_id', '=', job)
    .where('refused_entry.device_id', '=', device)
    .where('refused_entry.device_seq', '<', deviceSeq)
    .where('refused_entry.code', 'in', UNFORESEEN)
    .where('job_entry.seq', '>', basis)
    .execute();
  return [
    // As the tablet made them: of a conflict that the server saw in one it did not know.
    ...recorded.map(({ body }) => contentOf(JSON.parse(body) as Recorded) as Entry),
    ...refused.map(({ body }) => (JSON.parse(body) as { entry: Entry }).entry),
  ].sort((one, other) => one.deviceSeq - other.deviceSeq);
}
