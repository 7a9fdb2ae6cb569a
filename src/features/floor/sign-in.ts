import * as z from 'zod/mini';
import { keepOpenJobsOffline, pullJobList, pullWorkshop } from '@/offline/prefetch';
import { callServer, type Outcome } from '@/offline/server-call';
import {
  enrolAuthorKey,
  enrolTablet,
  listSignedIn,
  readTablet,
  refreshSignedIn,
  setWorking,
} from '@/offline/tablet';
import type { Offline } from '@/offline/offline';

const whoSignedIn = z.object({ personId: z.string() });

/** Signs a person in at this tablet beside whoever is; the tablet must be enrolled for their key to follow. */
export async function signIn(
  offline: Offline,
  { email, password }: { email: string; password: string },
): Promise<Outcome> {
  const answer = await callServer(offline, {
    method: 'POST',
    path: '/api/auth/sign-in',
    body: { email, password },
    answer: whoSignedIn,
  });
  if (!answer.ok) return answer;
  const refreshed = await refreshSignedIn(offline);
  if (!refreshed.ok) return refreshed;
  const { personId } = answer.body;
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

/** Finishes what a lost line left undone: the working person's key, where the tablet is enrolled without it. */
export async function finishEnrolment(offline: Offline, person: string): Promise<Outcome> {
  const signedIn = await listSignedIn(offline);
  if (signedIn.find((who) => who.person === person)?.hasKey === true) return { ok: true };
  const { enrolled } = await readTablet(offline);
  return enrolled ? enrolAuthorKey(offline, person) : { ok: true };
}
