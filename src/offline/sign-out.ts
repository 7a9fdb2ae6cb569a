/*
 * Leaving a tablet. Somebody who signs out here is gone from it at once, with or without a network; that their
 * session ends at the server is remembered and done when it can be reached. Only that one person's session ends.
 * Their key and their records stay: what was not sent yet still goes under their name.
 */
import * as z from 'zod/mini';
import { callServer, type Answer, type Outcome } from './server-call';
import type { Surroundings } from './surroundings';
import { forgetSignIn, readSigningOut } from './tablet';

/** Signs one person out at this tablet, and at the server now or when it can next be reached. */
export async function signOutHere(s: Surroundings, person: string): Promise<void> {
  const { meta, signedIn } = s.db;
  await s.db.transaction('rw', signedIn, meta, async () => {
    const waiting = new Set(await readSigningOut(s));
    await meta.put({ key: 'signingOut', value: [...waiting.add(person)] });
    await forgetSignIn(s, person);
  });
}

/** They signed in again meanwhile: the session that is there now is theirs to keep. */
export async function keepSession(s: Surroundings, person: string): Promise<void> {
  await s.db.transaction('rw', s.db.meta, async () => {
    const waiting = (await readSigningOut(s)).filter((one) => one !== person);
    if (waiting.length === 0) await s.db.meta.delete('signingOut');
    else await s.db.meta.put({ key: 'signingOut', value: waiting });
  });
}

/** Ends at the server the sessions of those who have left. */
export async function finishSignOuts(s: Surroundings): Promise<Outcome> {
  for (const person of await readSigningOut(s)) {
    const ended = await endSession(s, person);
    if (!ended.ok) return ended;
    await keepSession(s, person);
  }
  return { ok: true };
}

const nothing = z.object({ ok: z.literal(true) });

/** Ends a person's session; that there is none any more is as good. */
async function endSession(s: Surroundings, person: string): Promise<Outcome> {
  const ended = await ask(s, '/api/auth/sign-out', person);
  if (ended.ok || ended.code !== 'not-signed-in') return ended;
  // It may be the active session that is over, and not theirs: theirs is made the active one, and ended then.
  const switched = await ask(s, '/api/auth/switch', person);
  if (switched.ok) return ask(s, '/api/auth/sign-out', person);
  return switched.code === 'not-signed-in' ? { ok: true } : switched;
}

function ask(s: Surroundings, path: string, person: string): Promise<Answer<{ ok: true }>> {
  return callServer(s, { method: 'POST', path, body: { person }, answer: nothing, without: 'tablet' });
}

/** How many records of a person are only on this tablet. */
export async function countUnsentOf({ db }: Surroundings, person: string): Promise<number> {
  return db.outbox.filter(({ entry, where }) => entry.by === person && where !== 'sent').count();
}
