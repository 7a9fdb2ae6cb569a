import * as z from 'zod/mini';
import { keepOpenJobsOffline, pullJobList, pullWorkshop } from '@/offline/prefetch';
import { callServer, type Outcome } from '@/offline/server-call';
import { finishSignOuts, keepSession, signOutHere } from '@/offline/sign-out';
import {
  enrolAuthorKey,
  enrolTablet,
  listSignedIn,
  readTablet,
  refreshSignedIn,
  setWorking,
} from '@/offline/tablet';
import { JobNotHereError, type JobView } from '@/offline/job-store';
import type { Offline } from '@/offline/offline';
import { capInHand, capWords } from './cap-in-hand';

const whoSignedIn = z.object({ personId: z.string() });

/** Signs a person in at this tablet beside whoever is; the tablet must be enrolled for their key to follow. */
export async function signIn(
  offline: Offline,
  { email, password }: { email: string; password: string },
): Promise<Outcome> {
  // Else the session that begins now could be taken for the one that was to end.
  await finishSignOuts(offline);
  const answer = await callServer(offline, {
    method: 'POST',
    path: '/api/auth/sign-in',
    body: { email, password },
    answer: whoSignedIn,
  });
  if (!answer.ok) return answer;
  const { personId } = answer.body;
  await keepSession(offline, personId);
  const refreshed = await refreshSignedIn(offline);
  if (!refreshed.ok) return refreshed;
  await setWorking(offline, personId);
  const { enrolled } = await readTablet(offline);
  return enrolled ? settleIn(offline, personId) : { ok: true };
}

/** Enrols the tablet under a name and the working person's key on it, then brings what work offline needs. */
export async function nameTablet(offline: Offline, name: string, person: string): Promise<Outcome> {
  const enrolled = await enrolTablet(offline, name);
  return enrolled.ok ? settleIn(offline, person) : enrolled;
}

/** Brings people, tools, the list of jobs and the person's open jobs onto the tablet. */
export async function bringWork(offline: Offline, person: string | null): Promise<Outcome> {
  const workshop = await pullWorkshop(offline);
  if (!workshop.ok) return workshop;
  const jobs = await pullJobList(offline);
  if (!jobs.ok || person === null) return jobs;
  return keepOpenJobsOffline(offline, person);
}

async function settleIn(offline: Offline, person: string): Promise<Outcome> {
  const key = await enrolAuthorKey(offline, person);
  if (!key.ok) return key;
  return bringWork(offline, person);
}

/** Finishes what a lost line or a restore left undone: the working person's key, where the tablet is enrolled without it. */
export async function finishEnrolment(offline: Offline, person: string): Promise<Outcome> {
  const signedIn = await listSignedIn(offline);
  const here = signedIn.find((who) => who.person === person);
  if (here?.hasKey === true && !here.mustSignIn) return { ok: true };
  const { enrolled } = await readTablet(offline);
  return enrolled ? enrolAuthorKey(offline, person) : { ok: true };
}

/** Signs one person out at this tablet; the others stay, and so do the records. */
export async function leaveTablet(offline: Offline, person: string): Promise<void> {
  await signOutHere(offline, person);
  offline.sync.nudge();
}

/** Why a person can't leave the tablet now: a cap that they work on here stands half done. */
export async function whyNotLeave(offline: Offline, person: string): Promise<string | undefined> {
  const { id: device } = await readTablet(offline);
  for (const { id, number } of await offline.db.jobs.filter((job) => job.availableOffline).toArray()) {
    const view = offline.jobs.get(id) ?? (await openQuietly(offline, id));
    const working = view?.state.working;
    const isTheirs = working?.by === person && working.device === device;
    const cap = view && isTheirs ? capInHand(view.state) : undefined;
    if (cap) {
      return `Job ${number}: ${capWords(cap)} stand half tightened. Finish them, or let somebody take the job over.`;
    }
  }
  return undefined;
}

/** A job that is not whole on this tablet holds nobody here. */
async function openQuietly(offline: Offline, job: string): Promise<JobView | undefined> {
  try {
    return await offline.jobs.open(job);
  } catch (error) {
    if (error instanceof JobNotHereError) return undefined;
    throw error;
  }
}
