/*
 * The tablet and the people at it. A session is needed to make entries, never to deliver them, and nothing
 * that the network does signs anybody out: only a sign-out said here, or the server's own list, does.
 */
import * as z from 'zod/mini';
import type { Verdict } from '@/domain/job-state';
import { newAuthorKey } from './author-key';
import { changeJob, type AuthorKeyRow, type SignedInRow } from './database';
import { keepDevice, readDevice, type Device } from './device';
import { noteKeyKnown, noteLostKeys, readLostKeys } from './lost-keys';
import { callServer, type Outcome, type Trouble } from './server-call';
import type { Surroundings } from './surroundings';

export interface Tablet {
  id: string;
  name?: string | undefined;
  enrolled: boolean;
  mustEnrolAgain?: true | undefined;
}

/** This browser as a tablet. */
export async function readTablet(s: Surroundings): Promise<Tablet> {
  const { id, name, credential, mustEnrolAgain } = await readDevice(s);
  return {
    id,
    name,
    enrolled: credential !== undefined && !mustEnrolAgain,
    ...(mustEnrolAgain ? { mustEnrolAgain } : {}),
  };
}

const enrolled = z.object({ id: z.string(), credential: z.string() });

/**
 * Enrols this browser as a tablet; someone must be signed in. A tablet that a restored server has forgotten stays
 * the one it was. One that the workshop has put out of use gets a new id, and sends what the old one recorded under
 * the keys that signed it.
 */
export async function enrolTablet(s: Surroundings, name: string): Promise<Outcome> {
  const device = await readDevice(s);
  const first = await askToEnrol(s, device, device.id, name);
  return !first.ok && first.code === 'conflict' ? askToEnrol(s, device, s.newId(), name) : first;
}

async function askToEnrol(s: Surroundings, device: Device, id: string, name: string): Promise<Outcome> {
  const isSame = id === device.id;
  const answer = await callServer(s, {
    method: 'POST',
    path: '/api/devices',
    body: { id, name, ...(isSame ? { credential: device.credential } : {}) },
    answer: enrolled,
    without: 'tablet',
  });
  if (!answer.ok) return answer;
  const { db } = s;
  await db.transaction('rw', db.meta, db.authorKeys, db.counters, db.jobs, async () => {
    await keepDevice(db, { id, name, credential: answer.body.credential });
    if (isSame) {
      const keys = await db.authorKeys.toArray();
      const enrolled = keys.filter((key) => key.enrolled !== undefined);
      await noteLostKeys(
        db,
        enrolled.map(({ person }) => person),
      );
      return;
    }
    // Keys and numbers belong to the old id: new ones from here, and every open view must notice.
    await db.authorKeys.clear();
    await db.meta.delete('lostKeys');
    await db.counters.toCollection().modify({ deviceSeq: 0 });
    for (const job of await db.jobs.toCollection().primaryKeys()) await changeJob(db, job, {});
  });
  return { ok: true };
}

const activePerson = z.object({ actor: z.object({ personId: z.string() }) });
const enrolledKey = z.object({ id: z.string(), workshop: z.int() });

/**
 * Makes a person's key for this tablet and tells the server; does nothing where that is done already. The
 * server takes the key as that of whoever's session is active, so that is asked first.
 */
export async function enrolAuthorKey(s: Surroundings, person: string): Promise<Outcome> {
  const key = (await s.db.authorKeys.get(person)) ?? (await makeAuthorKey(s, person));
  const isLost = (await readLostKeys(s.db)).includes(person);
  if (key.enrolled !== undefined && !isLost) return { ok: true };
  const active = await callServer(s, { path: '/api/me', answer: activePerson, without: 'tablet' });
  if (!active.ok) return active;
  if (active.body.actor.personId !== person) return OTHER_SESSION;
  const answer = await callServer(s, {
    method: 'POST',
    path: '/api/keys',
    body: { publicKey: key.publicKey, ...(isLost ? { again: true } : {}) },
    answer: enrolledKey,
  });
  if (!answer.ok) return answer;
  await s.db.transaction('rw', s.db.authorKeys, s.db.meta, async () => {
    await s.db.authorKeys.update(person, { enrolled: answer.body.workshop });
    await noteKeyKnown(s.db, person);
  });
  return { ok: true };
}

/**
 * Enrols again the key that a restored server has forgotten, of whoever's session is the active one; the others have
 * to sign in. `tried` holds who was tried already. Tells whether one was enrolled, so that what waits for it is
 * worth another try.
 */
export async function enrolLostKeys(s: Surroundings, tried: Set<string>): Promise<boolean> {
  let isEnrolled = false;
  for (const person of await readLostKeys(s.db)) {
    if (tried.has(person) || !(await s.db.signedIn.get(person))) continue;
    tried.add(person);
    const outcome = await enrolAuthorKey(s, person);
    isEnrolled ||= outcome.ok;
  }
  return isEnrolled;
}

const OTHER_SESSION: Trouble = {
  ok: false,
  code: 'other-session',
  why: 'Someone else’s session is the active one in this browser. Sign in again as the person who is to work here.',
};

/** Kept before it is sent, so that a lost reply leads to the same key being sent again. */
async function makeAuthorKey(s: Surroundings, person: string): Promise<AuthorKeyRow> {
  const made: AuthorKeyRow = { person, ...(await newAuthorKey(s.subtle)) };
  return s.db.transaction('rw', s.db.authorKeys, async () => {
    const present = await s.db.authorKeys.get(person);
    if (present) return present;
    await s.db.authorKeys.add(made);
    return made;
  });
}

/** Notes that a person signed in at this tablet, beside whoever else is. */
export async function rememberSignIn(s: Surroundings, who: SignedInRow): Promise<void> {
  await s.db.signedIn.put(who);
}

/** Forgets a person's session after they signed out here; their key and their records stay. */
export async function forgetSignIn(s: Surroundings, person: string): Promise<void> {
  await s.db.transaction('rw', s.db.signedIn, s.db.meta, async () => {
    await s.db.signedIn.delete(person);
    if ((await whoIsWorking(s)) === person) await s.db.meta.delete('working');
  });
}

/** Who signed out here while their session at the server goes on until it can be reached. */
export async function readSigningOut({ db }: Surroundings): Promise<string[]> {
  return ((await db.meta.get('signingOut'))?.value as string[] | undefined) ?? [];
}

const me = z.object({
  sideBySide: z.array(
    z.object({
      personId: z.string(),
      name: z.string(),
      roles: z.array(z.string()),
      sessionUntil: z.string(),
    }),
  ),
});

/** Takes over the server's list of who is signed in here. Any trouble, a 401 included, changes nothing. */
export async function refreshSignedIn(s: Surroundings): Promise<Outcome> {
  const before = await s.db.signedIn.toArray();
  const answer = await callServer(s, { path: '/api/me', answer: me, without: 'tablet' });
  if (!answer.ok) return answer;
  const rows = answer.body.sideBySide.map(({ personId, ...rest }) => ({ person: personId, ...rest }));
  await s.db.transaction('rw', s.db.signedIn, s.db.meta, async () => {
    // Whoever signed in or out while the answer was on its way is right, not the answer.
    if (JSON.stringify(await s.db.signedIn.toArray()) !== JSON.stringify(before)) return;
    const leaving = new Set(await readSigningOut(s));
    await s.db.signedIn.clear();
    await s.db.signedIn.bulkPut(rows.filter(({ person }) => !leaving.has(person)));
  });
  return { ok: true };
}

const HOUR = 60 * 60 * 1000;

/**
 * Sessions slide while they are used: the tablet learns of it now and then. It only ever lengthens them,
 * because nobody is to be signed out in the middle of a cap, and trouble about it matters to nobody.
 */
export async function extendSessionsHourly(s: Surroundings): Promise<void> {
  const { meta, signedIn } = s.db;
  const last = (await meta.get('signedInAt'))?.value as number | undefined;
  if ((last !== undefined && s.now() - last < HOUR) || (await signedIn.count()) === 0) return;
  const answer = await callServer(s, { path: '/api/me', answer: me, without: 'tablet' });
  if (!answer.ok) return;
  await s.db.transaction('rw', signedIn, meta, async () => {
    for (const { personId, sessionUntil } of answer.body.sideBySide) {
      const row = await signedIn.get(personId);
      if (row && row.sessionUntil < sessionUntil) await signedIn.put({ ...row, sessionUntil });
    }
    await meta.put({ key: 'signedInAt', value: s.now() });
  });
}

/** Somebody who is signed in at this tablet, as it knows them. */
export interface SignedInHere extends SignedInRow {
  /** The workshop has been told of their key on this tablet. */
  hasKey: boolean;
  /** A restored server has forgotten it. They may go on; what they record waits until they sign in again. */
  mustSignIn: boolean;
}

/** Everybody who is signed in at this tablet, and what the workshop knows of their keys. */
export async function listSignedIn(s: Surroundings): Promise<SignedInHere[]> {
  const [people, keys, lost] = await Promise.all([
    s.db.signedIn.orderBy('person').toArray(),
    s.db.authorKeys.toArray(),
    readLostKeys(s.db),
  ]);
  const withKey = new Set(keys.filter((key) => key.enrolled !== undefined).map((key) => key.person));
  return people.map((row) => ({
    ...row,
    hasKey: withKey.has(row.person),
    mustSignIn: lost.includes(row.person),
  }));
}

/** The person who said that they are working here: a claim, not proof. */
export async function whoIsWorking(s: Surroundings): Promise<string | null> {
  const row = await s.db.meta.get('working');
  return (row?.value as string | undefined) ?? null;
}

/** Changes who is working here. */
export async function setWorking(s: Surroundings, person: string): Promise<void> {
  await s.db.meta.put({ key: 'working', value: person });
}

/** May this person make entries on this tablet now? */
export async function canMakeEntries(s: Surroundings, person: string, now = s.now()): Promise<Verdict> {
  const [session, isKnown] = await Promise.all([s.db.signedIn.get(person), hasKey(s, person)]);
  if (!session || Date.parse(session.sessionUntil) <= now) {
    return {
      ok: false,
      code: 'not-signed-in',
      why: session
        ? `${session.name} has been signed in here too long ago.`
        : 'This person is not signed in here.',
      unlock: 'Sign in on this tablet. What was recorded before is safe.',
    };
  }
  return isKnown ? { ok: true } : noKey(session.name);
}

/** Has the workshop this person's key for this tablet? Enough to sign with a PIN without a session. */
export async function canSignWithPin(s: Surroundings, person: string): Promise<Verdict> {
  if (await hasKey(s, person)) return { ok: true };
  const workshop = await s.db.workshop.get('workshop');
  return noKey(workshop?.people.find(({ id }) => id === person)?.name ?? 'This person');
}

async function hasKey(s: Surroundings, person: string): Promise<boolean> {
  const key = await s.db.authorKeys.get(person);
  return key?.enrolled !== undefined;
}

function noKey(name: string): Verdict {
  return {
    ok: false,
    code: 'no-key',
    why: `${name} has no key on this tablet yet.`,
    unlock: 'Sign in on this tablet once while it has a network.',
  };
}
