/* What a browser's pages carry, against the real handlers: only the network between them is fake.
 * Whoever uses it imports 'fake-indexeddb/auto' before anything else. */
import { webcrypto } from 'node:crypto';
import { expect } from 'vitest';
import type { EntryData } from '@/domain/entry';
import type { Plan } from '@/domain/plan';
import { openFloorDatabase } from '@/offline/database';
import { openOffline, type Offline } from '@/offline/offline';
import { signOpening } from '@/offline/opening';
import { pullWorkshop } from '@/offline/prefetch';
import { enrolAuthorKey, enrolTablet, readTablet, rememberSignIn } from '@/offline/tablet';
import { POST as postDevices } from '@/pages/api/devices/index';
import { GET as getFloorJobs } from '@/pages/api/floor/jobs';
import { POST as postJobs } from '@/pages/api/jobs/index';
import { POST as postPrepare } from '@/pages/api/jobs/prepare';
import { POST as postKeys } from '@/pages/api/keys/index';
import { GET as getMe } from '@/pages/api/me/index';
import { PUT as putPhoto } from '@/pages/api/photos/[hash]';
import { GET as getPlan } from '@/pages/api/plans/[hash]';
import { POST as postSync } from '@/pages/api/sync/index';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import type { HandlerContext } from '@/server/http';
import { must } from './offline-tablet';
import { ask, commitTo, testIdentity, type Hand, type Shop } from './tablet';

type Handler = (context: HandlerContext) => Promise<Response>;

const ROUTES: [RegExp, Record<string, Handler>][] = [
  [/^\/api\/devices$/, { POST: postDevices }],
  [/^\/api\/keys$/, { POST: postKeys }],
  [/^\/api\/me$/, { GET: getMe }],
  [/^\/api\/workshop$/, { GET: getWorkshop }],
  [/^\/api\/floor\/jobs$/, { GET: getFloorJobs }],
  [/^\/api\/plans\/(?<hash>\w+)$/, { GET: getPlan }],
  [/^\/api\/photos\/(?<hash>\w+)$/, { PUT: putPhoto }],
  [/^\/api\/sync$/, { POST: postSync }],
];

let browsers = 0;

/** A browser: its database, its clock, and whose session is the active one. */
export class Browser {
  readonly offline: Offline;
  session: Hand | undefined;
  isAway = false;
  /** Requests that don't arrive although the others do. */
  isCut: (path: string, body: string) => boolean = () => false;
  lostReplies = 0;
  now: number;

  constructor(
    readonly shop: Shop,
    name: string,
  ) {
    this.now = shop.app.clock.now().getTime();
    this.offline = openOffline({
      db: openFloorDatabase(`${name}-${(browsers += 1)}`),
      fetch: (path, init) => this.fetch(path, init),
      now: () => this.now,
      newId: () => shop.app.ids.next(),
      random: () => 0.5,
      subtle: webcrypto.subtle as SubtleCrypto,
      after: () => () => undefined,
    });
  }

  private async fetch(path: string, init: RequestInit = {}): Promise<Response> {
    const isCut = this.isCut(path, typeof init.body === 'string' ? init.body : '');
    if (this.isAway || isCut) throw new TypeError('Failed to fetch');
    for (const [pattern, handlers] of ROUTES) {
      const match = pattern.exec(path);
      const handler = handlers[init.method ?? 'GET'];
      if (!match || !handler) continue;
      const request = new Request(`http://localhost:4321${path}`, init);
      const params = { ...match.groups };
      const response = await handler({ request, params, locals: { actor: this.session } });
      if (this.lostReplies === 0) return response;
      this.lostReplies -= 1;
      throw new TypeError('network error');
    }
    throw new Error(`No handler for ${path}`);
  }

  async signIn(person: Hand): Promise<void> {
    this.session = person;
    const { id, name, roles } = person;
    const sessionUntil = new Date(this.now + 400 * 3_600_000).toISOString();
    await rememberSignIn(this.offline, { person: id, name, roles, sessionUntil });
    if (!(await readTablet(this.offline)).enrolled) must(await enrolTablet(this.offline, 'Bay 1'));
    must(await enrolAuthorKey(this.offline, id));
    must(await pullWorkshop(this.offline));
  }

  /** Moves this browser's clock and the server's on together. */
  pass(ms: number): void {
    this.now += ms;
    this.shop.app.clock.advance(ms);
  }
}

/** The supervisor opens a job at the desk; the answer is its id. */
export async function openAtDesk(desk: Browser): Promise<string> {
  const { supervisor, ann } = desk.shop.people;
  await desk.signIn(supervisor);
  const wanted = { route: 'test-route', options: { plate: 'fitted' } };
  const prepared = await ask(postPrepare, { as: supervisor, body: wanted });
  const { number, plan, planBody } = prepared.body as { number: string; plan: string; planBody: Plan };
  const identity = testIdentity();
  const data: EntryData<'opened'> = {
    number,
    engine: planBody.engine.name,
    options: planBody.options,
    odometer: { value: '120300', unit: 'km' },
    commitments: commitTo(identity),
    oldParts: 'to the customer',
  };
  const made = await signOpening(desk.offline, { plan, data, by: supervisor.id });
  if (!made.ok) throw new Error(made.why);
  const { entry, signature, key } = made;
  const body = { entry, signature, key, identity, people: [ann.id] };
  const opened = await ask(postJobs, { as: supervisor, body });
  expect(opened).toMatchObject({ status: 201, body: { id: entry.job, number } });
  expect(await ask(postJobs, { as: supervisor, body })).toMatchObject({
    status: 200,
    body: { id: entry.job },
  });
  return entry.job;
}
