/*
 * A judgement given at a desk: an entry like any other, signed here by its author's key, and sent at once. Once it
 * is signed it is kept in this browser until the server has answered, however often the network goes.
 */
import { liveQuery } from 'dexie';
import type { Offline } from './offline';
import { makeAvailableOffline, pullJobList, pullWorkshop } from './prefetch';
import { recordEntries, type Draft } from './record';
import type { Outcome } from './server-call';
import { readTablet } from './tablet';

/** What became of a judgement: recorded, not recorded and why, or signed and kept here for want of an answer. */
export type DeskOutcome =
  { ok: true } | { ok: false; code: string; why: string; /** The entries that wait here. */ kept?: string[] };

/** Records it on the job as the server has it now, and says what the server made of it. */
export async function recordAtDesk(
  offline: Offline,
  job: string,
  draft: Draft,
  by: string,
): Promise<DeskOutcome> {
  if (!(await readTablet(offline)).enrolled) return NOT_READY;
  for (const bring of [
    () => pullWorkshop(offline),
    () => pullJobList(offline),
    () => makeAvailableOffline(offline, job),
    () => offline.sync.now(),
  ]) {
    const brought = await bring();
    if (!brought.ok) return { ok: false, code: brought.code, why: wordsAtDesk(brought) };
  }
  await offline.jobs.refresh(job);
  const made = await recordEntries(offline, job, [draft], { by });
  if (!made.ok) return { ok: false, code: made.code, why: [made.why, made.unlock].filter(Boolean).join(' ') };
  return sendKept(
    offline,
    job,
    made.entries.map(({ id }) => id),
  );
}

const NOT_READY: DeskOutcome = {
  ok: false,
  code: 'not-ready',
  why: 'This browser can’t sign for you yet. Sign in here once more, then try again.',
};

/** Sends what was signed here and is kept, and says what the server made of it. */
export async function sendKept(offline: Offline, job: string, ids: readonly string[]): Promise<DeskOutcome> {
  const sent = await offline.sync.now();
  const view = await offline.jobs.refresh(job);
  const refused = view.refused.find(({ id }) => ids.includes(id));
  if (refused) return { ok: false, code: refused.code, why: refused.reason };
  const kept = view.pending.filter(({ id }) => ids.includes(id));
  // What the server has on its disk comes back with the trail; that it did not come back yet changes nothing.
  const [waiting] = kept.filter(({ where }) => where !== 'sent');
  if (!waiting) return { ok: true };
  const why = sent.ok ? (waiting.reason ?? 'The server has not answered yet.') : wordsAtDesk(sent);
  return { ok: false, code: 'kept', why, kept: kept.map(({ id }) => id) };
}

function wordsAtDesk(outcome: Outcome & { ok: false }): string {
  return outcome.offline ? 'The server was not reached.' : outcome.why;
}

/** What of a job is signed in this browser and not on the record yet. */
export interface KeptHere {
  count: number;
  /** Why the server has not taken the first of it, where it said so. */
  reason?: string | undefined;
}

/** Reads what of a job is signed here and has not been answered. */
export async function readKept({ db }: Offline, job: string): Promise<KeptHere> {
  const rows = await db.outbox.filter((row) => row.job === job && row.where !== 'sent').toArray();
  return { count: rows.length, reason: rows.find(({ reason }) => reason !== undefined)?.reason };
}

/** Tells of it now and at every change, and has it sent as soon as that can be; the answer ends the telling. */
export function watchKept(offline: Offline, job: string, tell: (kept: KeptHere) => void): () => void {
  const watched = liveQuery(() => readKept(offline, job)).subscribe((kept) => {
    if (kept.count > 0) offline.sync.start();
    tell(kept);
  });
  return () => watched.unsubscribe();
}
