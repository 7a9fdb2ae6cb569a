/*
 * One run of the sync: everything in the outbox is sent once, in order, and every job kept here is brought
 * up to the server's head. Each step writes what it learned before the next begins, so a run may be cut
 * anywhere: the next one sends the same records again and is told "already recorded".
 */
import { keepDevice, readDevice, type Device } from './device';
import { sendPhotos } from './photo-queue';
import { fetchMissingPlans, pullWorkshop } from './prefetch';
import { callServer, type Outcome, type Trouble } from './server-call';
import { instantOf, type Surroundings } from './surroundings';
import { syncAnswer, type SyncAnswer } from './sync-answer';
import { applyJobAnswer } from './sync-pull';
import { applyVerdicts, nextBatch, toWire, type Batch } from './sync-push';
import type { JobRow } from './database';

/** Sends and brings everything once. */
export async function runSync(s: Surroundings): Promise<Outcome> {
  const device = await readDevice(s);
  if (device.credential === undefined) return NOT_ENROLLED;
  const tried = new Set<string>();
  for (;;) {
    const [batch, jobs] = await Promise.all([nextBatch(s.db, tried), jobsToAskFor(s)]);
    const answer = await exchange(s, device, batch, jobs);
    if (!answer.ok) return noteTrouble(s, device, answer);
    const at = instantOf(s.now());
    await applyVerdicts(s.db, batch.rows, answer.body.verdicts, at);
    const { goesOn, isRestored } = await applyJobs(s, jobs, answer.body, at);
    // What a restored server lacks goes first; whatever waited for it is worth another try.
    if (isRestored) tried.clear();
    else for (const { id } of batch.rows) tried.add(id);
    if (!batch.more && !goesOn) return afterwards(s, device, answer.body.workshop);
  }
}

const NOT_ENROLLED: Trouble = {
  ok: false,
  code: 'not-enrolled',
  why: 'This tablet is not enrolled yet. What is recorded stays on it until then.',
};

const ENROL_AGAIN: Trouble = {
  ok: false,
  code: 'enrol-again',
  why: 'This tablet must be enrolled again. Nothing is lost: sign in on it, enrol it, and everything is sent.',
};

/** Jobs made available offline, and any with a record that still has to arrive. */
async function jobsToAskFor({ db }: Surroundings): Promise<JobRow[]> {
  const waiting = new Set<string>();
  await db.outbox.toCollection().eachPrimaryKey(([job]) => waiting.add(job));
  return db.jobs.filter((row) => row.availableOffline || waiting.has(row.id)).toArray();
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

interface Applied {
  /** There is more to fetch, and fetching got further than before. */
  goesOn: boolean;
  isRestored: boolean;
}

async function applyJobs(s: Surroundings, jobs: JobRow[], answer: SyncAnswer, at: string): Promise<Applied> {
  let goesOn = false;
  let isRestored = false;
  for (const part of answer.jobs) {
    const asked = jobs.find(({ id }) => id === part.id);
    if (!asked) continue;
    const moved = await applyJobAnswer(s.db, asked, part, at);
    isRestored ||= moved && part.restored === true;
    goesOn ||= isRestored || (moved && part.more);
  }
  return { goesOn, isRestored };
}

/** A tablet that the server no longer knows keeps everything and says so. */
async function noteTrouble(s: Surroundings, device: Device, trouble: Trouble): Promise<Outcome> {
  if (trouble.code !== 'unknown-tablet') return trouble;
  await s.db.transaction('rw', s.db.meta, async () => {
    const present = await readDevice(s);
    if (present.credential === device.credential)
      await keepDevice(s.db, { ...present, mustEnrolAgain: true });
  });
  return { ...ENROL_AGAIN };
}

/** The workshop, missing plans and photographs, once the records are there. */
async function afterwards(s: Surroundings, device: Device, workshopSeq: number): Promise<Outcome> {
  if (device.mustEnrolAgain) await keepDevice(s.db, { ...device, mustEnrolAgain: undefined });
  const workshop = await s.db.workshop.get('workshop');
  if (!workshop || workshop.seq < workshopSeq) {
    const pulled = await pullWorkshop(s);
    if (!pulled.ok) return pulled;
  }
  const plans = await fetchMissingPlans(s);
  return plans.ok ? sendPhotos(s) : plans;
}
