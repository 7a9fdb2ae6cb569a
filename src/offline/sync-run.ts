/*
 * One run of the sync: everything in the outbox is sent once, in order, and every job kept here is brought
 * up to the server's head. Each step writes what it learned before the next begins, so a run may be cut
 * anywhere: the next one sends the same records again and is told "already recorded".
 */
import type { JobRow } from './database';
import { keepDevice, readDevice, type Device } from './device';
import { sendPhotos, sendPhotosAgain } from './photo-queue';
import { fetchMissingPlans, pullWorkshop } from './prefetch';
import { noteLostVerdicts } from './lost-keys';
import { callServer, type Outcome, type Trouble } from './server-call';
import { instantOf, type Surroundings } from './surroundings';
import { syncAnswer, type SyncAnswer } from './sync-answer';
import { finishSignOuts } from './sign-out';
import { applyJobAnswer } from './sync-pull';
import { applyVerdicts, nextBatch, toWire, type Batch } from './sync-push';
import { enrolLostKeys, extendSessionsHourly } from './tablet';

/** As many as the server lets a tablet ask for at once. */
const MAX_JOBS = 100;

/** Sends and brings everything once. */
export async function runSync(s: Surroundings): Promise<Outcome> {
  // What does not come about stays noted and is tried again with the next run.
  await finishSignOuts(s);
  const device = await readDevice(s);
  if (device.credential === undefined) return NOT_ENROLLED;
  const tried = new Set<string>();
  const behind = new Set(await jobsToAskFor(s));
  const keyed = new Set<string>();
  for (;;) {
    const batch = await nextBatch(s.db, tried);
    for (const { job } of batch.rows) behind.add(job);
    const jobs = await nextJobs(s, behind);
    const answer = await exchange(s, device, batch, jobs);
    if (!answer.ok) return answer;
    const at = instantOf(s.now());
    await applyVerdicts(s.db, batch.rows, answer.body.verdicts, at);
    await noteLostVerdicts(s.db, batch.rows, answer.body.verdicts);
    const { brought, isRestored } = await applyJobs(s, jobs, answer.body, at, behind);
    // What a restored server lacks goes first; whatever waited for it is worth another try.
    const isKeyed = batch.rows.length > 0 && (await enrolLostKeys(s, keyed));
    const isAnew = isRestored || isKeyed;
    if (isAnew) tried.clear();
    else for (const { id } of batch.rows) tried.add(id);
    const isMoving = brought || batch.rows.length > 0;
    const isLeft = batch.more || isAnew || behind.size > 0;
    if (!isMoving || !isLeft) return afterwards(s, device, answer.body);
  }
}

const NOT_ENROLLED: Trouble = {
  ok: false,
  code: 'not-enrolled',
  why: 'This tablet is not enrolled yet. What is recorded stays on it until then.',
};

/** Jobs made available offline, and any with a record that still has to arrive. */
async function jobsToAskFor({ db }: Surroundings): Promise<string[]> {
  const waiting = new Set((await db.outbox.toCollection().primaryKeys()).map(([job]) => job));
  const rows = await db.jobs.toArray();
  return rows.filter((row) => row.availableOffline || waiting.has(row.id)).map(({ id }) => id);
}

async function nextJobs({ db }: Surroundings, behind: ReadonlySet<string>): Promise<JobRow[]> {
  const rows = await db.jobs.bulkGet([...behind].slice(0, MAX_JOBS));
  return rows.flatMap((row) => row ?? []);
}

function exchange(s: Surroundings, device: Device, batch: Batch, jobs: JobRow[]) {
  return callServer(s, {
    method: 'POST',
    path: '/api/sync',
    body: {
      device: device.id,
      sentAt: instantOf(s.now()),
      jobs: jobs.map(({ id, have }) => ({ id, have })),
      entries: batch.rows.map(toWire),
    },
    answer: syncAnswer,
  });
}

/** Takes over what came of each job; those that have come to their end leave `behind`. */
async function applyJobs(
  s: Surroundings,
  jobs: JobRow[],
  answer: SyncAnswer,
  at: string,
  behind: Set<string>,
): Promise<{ brought: boolean; isRestored: boolean }> {
  let brought = false;
  let isRestored = false;
  const parts = new Map(answer.jobs.map((part) => [part.id, part]));
  for (const asked of jobs) {
    const part = parts.get(asked.id);
    const moved = part !== undefined && (await applyJobAnswer(s.db, asked, part, at));
    brought ||= moved;
    const wasRestored = moved && part.restored === true;
    isRestored ||= wasRestored;
    // Nothing taken out of a page that was not empty means that the job is stopped.
    const isStuck = !moved && (part?.entries.length ?? 0) > 0;
    if (!wasRestored && (isStuck || part?.more !== true)) behind.delete(asked.id);
  }
  return { brought, isRestored };
}

/** How far off this tablet's clock is; a change of less than a second is nothing to write down. */
async function noteClock({ db }: Surroundings, offsetMs: number): Promise<void> {
  const before = (await db.meta.get('clock'))?.value as number | undefined;
  if (before !== undefined && Math.abs(before - offsetMs) < 1000) return;
  await db.meta.put({ key: 'clock', value: offsetMs });
}

/** The workshop, missing plans and photographs, once the records are there. */
async function afterwards(
  s: Surroundings,
  device: Device,
  { workshop: workshopSeq, clockOffsetMs, restoredAt }: SyncAnswer,
): Promise<Outcome> {
  if (device.mustEnrolAgain) await keepDevice(s.db, { ...device, mustEnrolAgain: undefined });
  if (clockOffsetMs !== undefined) await noteClock(s, clockOffsetMs);
  // Whatever else fails: a handover waits at the server for photographs, and for nothing else of these.
  if (restoredAt) await sendPhotosAgain(s, restoredAt);
  const photos = await sendPhotos(s);
  const workshop = await s.db.workshop.get('workshop');
  // After a restore the same number may stand for another workshop.
  const isOther = (workshop?.restoredAt ?? null) !== (restoredAt ?? null);
  if (!workshop || isOther || workshop.seq < workshopSeq) {
    const pulled = await pullWorkshop(s);
    if (!pulled.ok) return pulled;
  }
  await extendSessionsHourly(s);
  const plans = await fetchMissingPlans(s);
  return plans.ok ? photos : plans;
}
