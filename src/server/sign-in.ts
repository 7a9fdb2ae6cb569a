import * as z from 'zod';
import { countAttempt, forgetAttempts, signInAttempts, waitWords } from './attempts';
import { CLIENT_ADDRESS_HEADER } from './auth';
import type { App } from './compose';
import { AppError } from './errors';
import { listSignedIn } from './session';

/*
 * Signing in goes through the library's HTTP handler, so that its limit on attempts holds; changing who is
 * active and signing out go through its functions, so that session tokens never reach a script.
 */

const failure = z.object({ code: z.string().optional() });
const success = z.object({ user: z.object({ id: z.string() }) });

/** Signs a person in at this browser, beside whoever is; the answer must carry the cookies. */
export async function signIn(
  app: App,
  request: Request,
  credentials: { email: string; password: string },
): Promise<{ personId: string; cookies: string[] }> {
  const key = signInAttempts(credentials.email);
  await requireFewAttempts(app, request, credentials.email);
  const { publicUrl } = app.settings;
  const headers = new Headers({ 'content-type': 'application/json', origin: publicUrl });
  for (const name of ['cookie', 'user-agent', CLIENT_ADDRESS_HEADER]) {
    const value = request.headers.get(name);
    if (value !== null) headers.set(name, value);
  }
  const response = await app.auth.handler(
    new Request(`${publicUrl}/api/auth/sign-in/email`, {
      method: 'POST',
      headers,
      body: JSON.stringify(credentials),
    }),
  );
  if (response.ok) {
    const { user } = success.parse(await response.json());
    await app.db.transaction().execute((trx) => forgetAttempts(trx, key));
    return { personId: user.id, cookies: response.headers.getSetCookie() };
  }
  if (response.status === 429) {
    throw new AppError(
      'too-many-attempts',
      'Too many people tried to sign in from here within a minute. Wait a minute and try again.',
    );
  }
  const { code } = failure.parse(await response.json());
  if (code === 'DEACTIVATED') {
    throw new AppError(
      'wrong-sign-in',
      'This person no longer works here, so they cannot sign in. Ask the owner to take them back.',
    );
  }
  if (response.status === 401) {
    throw new AppError(
      'wrong-sign-in',
      'The e-mail address and the password do not go together. Try again, or ask the owner for a new link.',
    );
  }
  throw new Error(`Signing in failed with ${response.status} ${code ?? ''}`);
}

/** Refuses an account that was tried too often, in the same words whether there is one or not. */
async function requireFewAttempts(app: App, request: Request, email: string): Promise<void> {
  const key = signInAttempts(email);
  const over = await app.db.transaction().execute((trx) => countAttempt(trx, key, app.clock));
  if (over === undefined) return;
  const person = await app.db
    .selectFrom('person')
    .select('id')
    .where('email', '=', email.toLowerCase())
    .executeTakeFirst();
  const from = request.headers.get(CLIENT_ADDRESS_HEADER);
  app.log.warn(
    { person: person?.id ?? 'nobody with this address', from, minutes: over.waitMinutes },
    'An account was tried too often and lets nobody in for a while',
  );
  throw new AppError(
    'too-many-attempts',
    `Somebody tried to sign in with this e-mail address too often. ${waitWords(over.waitMinutes)} and try again, or ask the owner for a new link. Whoever is signed in already stays so.`,
  );
}

/** Makes another person who is signed in at this browser the one who is active. */
export async function switchTo(app: App, request: Request, personId: string): Promise<string[]> {
  const token = await requireToken(app, request, personId);
  const { headers } = await app.auth.api.setActiveSession({
    body: { sessionToken: token },
    headers: request.headers,
    returnHeaders: true,
  });
  return headers.getSetCookie();
}

/** Signs one person out at this browser; the others stay. */
export async function signOut(app: App, request: Request, personId: string): Promise<string[]> {
  const token = await requireToken(app, request, personId);
  const { headers } = await app.auth.api.revokeDeviceSession({
    body: { sessionToken: token },
    headers: request.headers,
    returnHeaders: true,
  });
  return headers.getSetCookie();
}

async function requireToken(app: App, request: Request, personId: string): Promise<string> {
  const found = (await listSignedIn(app, request)).find((person) => person.personId === personId);
  if (found !== undefined) return found.token;
  throw new AppError(
    'not-signed-in',
    'This person is not signed in here. Let them sign in with their password.',
  );
}
