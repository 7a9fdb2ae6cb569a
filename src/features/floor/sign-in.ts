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

const nothing = z.object({});
const whoIsActive = z.object({ person: z.object({ id: z.string() }) });

/** Signs a person in at this tablet beside whoever is; the tablet must be enrolled for their key to follow. */
export async function signIn(
  offline: Offline,
  { email, password }: { email: string; password: string },
): Promise<Outcome> {
  const answer = await callServer(offline, {
    method: 'POST',
    path: '/api/auth/sign-in',
    body: { email, password },
    answer: nothing,
  });
  if (!answer.ok) return answer;
  const who = await callServer(offline, { path: '/api/me', answer: whoIsActive });
  if (!who.ok) return who;
  const refreshed = await refreshSignedIn(offline);
  if (!refreshed.ok) return refreshed;
  await setWorking(offline, who.body.person.id);
  const { enrolled } = await readTablet(offline);
  return enrolled ? settleIn(offline, who.body.person.id) : { ok: true };
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
