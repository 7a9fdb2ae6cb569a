import { parseSetCookieHeader } from 'better-auth/cookies';
import { expect } from 'vitest';
import type { Role } from '@/domain/role';
import type { Actor } from '@/server/actor';
import { hashNewPassword, storePassword } from '@/server/passwords';
import { addFirstOwner, addPerson } from '@/server/people';
import { POST as postSignIn } from '@/pages/api/auth/sign-in';
import type { TestApp } from './database';

/*
 * Calls exported route handlers as a browser would: with a cookie jar, a content type and, on a tablet, the
 * tablet's credential.
 */

type Handler = (context: { request: Request; params?: Record<string, string> }) => Promise<Response>;

export interface Ask {
  method?: string;
  /** Sent as JSON unless it is text or bytes already. */
  body?: unknown;
  params?: Record<string, string>;
  query?: Record<string, string>;
  headers?: Record<string, string>;
}

/** One browser: it keeps cookies and, once enrolled, a tablet's credential. */
export interface Browser {
  cookies: Map<string, string>;
  tablet?: string;
  ask(handler: Handler, ask?: Ask): Promise<Answer>;
}

export interface Answer {
  status: number;
  body: unknown;
  headers: Headers;
}

const ORIGIN = 'http://localhost:4321';

/** A browser in which nobody is signed in yet. */
export function newBrowser(): Browser {
  const browser: Browser = {
    cookies: new Map(),
    ask: async (handler, ask = {}) => {
      const response = await handler({ request: toRequest(browser, ask), params: ask.params ?? {} });
      keepCookies(browser, response);
      const text = await response.text();
      return {
        status: response.status,
        body: text === '' ? undefined : JSON.parse(text),
        headers: response.headers,
      };
    },
  };
  return browser;
}

/** A request as this browser would send it. */
export function toRequest(browser: Browser, ask: Ask, path = '/api/test'): Request {
  const url = new URL(path, ORIGIN);
  for (const [name, value] of Object.entries(ask.query ?? {})) url.searchParams.set(name, value);
  const headers = new Headers({ 'x-client-address': '192.0.2.7' });
  const cookie = [...browser.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  if (cookie !== '') headers.set('cookie', cookie);
  if (browser.tablet !== undefined) headers.set('authorization', `Tablet ${browser.tablet}`);
  if (ask.body !== undefined) headers.set('content-type', 'application/json');
  for (const [name, value] of Object.entries(ask.headers ?? {})) headers.set(name, value);
  const method = ask.method ?? (ask.body === undefined ? 'GET' : 'POST');
  const body = typeof ask.body === 'string' ? ask.body : JSON.stringify(ask.body);
  return new Request(url, { method, headers, ...(ask.body === undefined ? {} : { body }) });
}

/** Takes over the cookies of an answer, as a browser does. */
export function keepCookies(browser: Browser, response: Response): void {
  for (const line of response.headers.getSetCookie()) {
    for (const [name, cookie] of parseSetCookieHeader(line)) {
      if (cookie['max-age'] === 0) browser.cookies.delete(name);
      else browser.cookies.set(name, encodeURIComponent(cookie.value));
    }
  }
}

export const TEST_PASSWORD = 'a long test password';

/** A person of the test workshop, as an acting person. */
export interface TestPerson extends Actor {
  email: string;
}

let hashed: Promise<string> | undefined;

/** Makes an owner and people of the given roles; all have the same password. */
export async function addTestPeople<K extends string>(
  app: TestApp,
  people: Record<K, readonly Role[]>,
): Promise<Record<K | 'owner', TestPerson>> {
  hashed ??= hashNewPassword(TEST_PASSWORD);
  const hash = await hashed;
  return app.db.transaction().execute(async (trx) => {
    const first = { name: 'Odile Testwright', email: 'owner@witnessmark.example' };
    const owner = await addFirstOwner(trx, first, app);
    await storePassword(trx, owner.personId, hash, app);
    const made: Record<string, TestPerson> = { owner: { ...owner, ...first } };
    for (const [key, roles] of Object.entries<readonly Role[]>(people)) {
      const person = { name: `Test ${key}`, email: `${key}@witnessmark.example`, roles };
      const personId = await addPerson(trx, owner, person, app);
      await storePassword(trx, personId, hash, app);
      made[key] = { personId, sessionId: undefined, ...person };
    }
    return made;
  });
}

/** Signs a person in at a browser, a new one unless given. */
export async function signIn(person: TestPerson, browser: Browser = newBrowser()): Promise<Browser> {
  const answer = await browser.ask(postSignIn, { body: { email: person.email, password: TEST_PASSWORD } });
  expect(answer, 'signing in').toMatchObject({ status: 200 });
  return browser;
}
