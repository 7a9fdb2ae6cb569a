/*
 * Keys that a restored server has forgotten. What they signed waits, and work goes on; each is enrolled again, the
 * same key, by its person's own session on this tablet, exactly as it was the first time.
 */
import type { FloorDatabase } from './database';
import type { Surroundings } from './surroundings';
import { enrolAuthorKey } from './tablet';

/** Notes that the server does not know a key that it knew; call it inside a transaction that holds `authorKeys`. */
export async function noteLostKey(db: FloorDatabase, key: string): Promise<void> {
  await db.authorKeys
    .filter(({ id, enrolled }) => id === key && enrolled !== undefined)
    .modify({ mustEnrolAgain: true });
}

/**
 * Enrols again the forgotten key of whoever's session is the active one; the others have to sign in. `tried` holds
 * who was tried in this run. Tells whether one was enrolled, so that what waits for it is worth another try.
 */
export async function enrolLostKeys(s: Surroundings, tried: Set<string>): Promise<boolean> {
  let isEnrolled = false;
  for (const { person } of await s.db.authorKeys.filter(isLost).toArray()) {
    if (tried.has(person) || !(await s.db.signedIn.get(person))) continue;
    tried.add(person);
    const outcome = await enrolAuthorKey(s, person);
    isEnrolled ||= outcome.ok;
  }
  return isEnrolled;
}

/** The names of those who have to sign in here again before what they recorded can be sent. */
export async function readWhoMustSignIn(db: FloorDatabase): Promise<string[]> {
  const lost = await db.authorKeys.filter(isLost).toArray();
  if (lost.length === 0) return [];
  const [workshop, signedIn] = await Promise.all([db.workshop.get('workshop'), db.signedIn.toArray()]);
  const names = new Map([
    ...(workshop?.people ?? []).map(({ id, name }) => [id, name] as const),
    ...signedIn.map(({ person, name }) => [person, name] as const),
  ]);
  return lost.map(({ person }) => names.get(person) ?? 'Somebody who was added after the backup').sort();
}

function isLost({ mustEnrolAgain }: { mustEnrolAgain?: true | undefined }): boolean {
  return mustEnrolAgain === true;
}
