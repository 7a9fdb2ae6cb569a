import { createHash, createHmac, randomBytes } from 'node:crypto';
import { documentHash } from '@/server/shipped-documents';
import { POST as postDevices } from '@/pages/api/devices/index';
import { POST as postJobs } from '@/pages/api/jobs/index';
import { POST as postPrepare } from '@/pages/api/jobs/prepare';
import { POST as postKeys } from '@/pages/api/keys/index';
import { POST as postSync } from '@/pages/api/sync/index';
import type { Entry, EntryData } from '@/domain/entry';
import type { Workshop } from '@/domain/job-state';
import type { Plan } from '@/domain/plan';
import type { Actor } from '@/server/actor';
import type { HandlerContext } from '@/server/http';
import { photoStorage } from '@/server/photos';
import { hashNewPin, storePin } from '@/server/pins';
import { releaseDocuments } from '@/server/released-documents';
import { recordCalibration } from '@/server/calibrations';
import { addTool } from '@/server/tools';
import { getWorkshopView, setWorkshop } from '@/server/workshop';
import { type PushAnswer, type PushBody, ScriptedTablet } from '@db/scripted-tablet';
import type { Kit } from '@db/scripted-work';
import { classOf, goodReadings } from './calibration';
import { openTestApp, type TestApp } from './database';
import { addTestPeople, type TestPerson } from './requests';
import { smallEngine, smallProcedures, smallRoute } from './small-documents';

/*
 * A whole workshop for tests of the record: people with PINs, tools in date, released documents, and scripted
 * tablets that push through the real handler.
 */

type Handler = (context: HandlerContext) => Promise<Response>;

export const PIN = '280461';

/** Somebody of the test workshop, as a scripted tablet needs them. */
export interface Hand extends TestPerson {
  id: string;
  pin: string;
  roles: TestPerson['roles'] & string[];
}

export type HandName = 'owner' | 'supervisor' | 'lead' | 'ann' | 'ben' | 'auditor';

export interface Shop {
  app: TestApp;
  people: Record<HandName, Hand>;
  kit: Kit;
}

/** Opens the test workshop. */
export async function openShop(): Promise<Shop> {
  const app = await openTestApp();
  const made = await addTestPeople(app, {
    supervisor: ['supervisor'],
    lead: ['quality lead'],
    ann: ['technician'],
    ben: ['technician'],
    auditor: ['auditor'],
  });
  const pinHash = await hashNewPin(PIN);
  const { owner, supervisor, lead } = made;
  await app.db.transaction().execute(async (trx) => {
    await setWorkshop(trx, owner, { name: 'Testwell Yard', zone: 'Europe/Lisbon' }, app);
    for (const person of Object.values(made)) await storePin(trx, person, pinHash, app);
    await addTestTool(app, trx, owner, 'torque wrench', 'TW-1', ['2', '60', 'N·m']);
    await addTestTool(app, trx, owner, 'angle gauge', 'AG-1', ['0', '360', 'deg']);
    const documents = [smallEngine(), ...smallProcedures(), smallRoute()];
    const texts = documents.map((document) => ({ document, text: '', hash: documentHash(document) }));
    await releaseDocuments(trx, { ...lead, roles: [...lead.roles, ...supervisor.roles] }, texts, app);
  });
  const people = Object.fromEntries(
    Object.entries(made).map(([name, person]) => [
      name,
      { ...person, id: person.personId, pin: PIN, roles: [...person.roles] },
    ]),
  ) as unknown as Record<HandName, Hand>;
  const today = app.clock.now().toISOString().slice(0, 10);
  return { app, people, kit: { workshop: await workshopOf(app), today, photo: testPhoto } };
}

const bytesOf = (subject: string) => Buffer.from(`a photograph of ${subject}`);

/** A photograph of the test workshop; its bytes are kept when a job is opened, unless a test wants them missing. */
function testPhoto(subject: string): { hash: string; bytes: number; type: 'image/jpeg' } {
  const bytes = bytesOf(subject);
  return { hash: photoHash(subject), bytes: bytes.byteLength, type: 'image/jpeg' };
}

/** The hash of the test photograph of a subject. */
export function photoHash(subject: string): string {
  return createHash('sha256').update(bytesOf(subject)).digest('hex');
}

/** Puts the bytes of a test photograph where the server keeps them. */
export async function keepTestPhoto({ app }: Shop, subject: string): Promise<void> {
  const bytes = bytesOf(subject);
  const hash = photoHash(subject);
  await photoStorage(app).put(`photos/${hash}`, bytes);
  await photoStorage(app).put(`thumbs/${hash}`, bytes);
  const row = { hash, bytes: bytes.byteLength, type: 'image/jpeg', uploaded_by_device: null };
  await app.db
    .insertInto('photo')
    .values({ ...row, stored_at: app.clock.now().toISOString() })
    .onConflict((conflict) => conflict.column('hash').doNothing())
    .execute();
}

async function addTestTool(
  app: TestApp,
  trx: Parameters<typeof addTool>[0],
  owner: Actor,
  kind: string,
  serial: string,
  [rangeLow, rangeHigh, unit]: [string, string, string],
): Promise<void> {
  const range = { rangeLow, rangeHigh, unit, ...classOf(kind) };
  const facts = { name: kind, kind, serial, ...range, dueOn: null, cycleLimit: null };
  const tool = await addTool(trx, owner, facts, app);
  const days = { on: '2031-01-10', dueOn: '2032-01-10' };
  const calibration = { ...days, certificate: `C-${serial}`, readings: goodReadings(facts) };
  await recordCalibration(trx, owner, tool.id, calibration, app);
}

/** Anybody of the workshop may read what tablets judge by. */
const READER: Actor = { personId: 'reader', name: 'Reader', roles: ['auditor'], sessionId: undefined };

/** The workshop as tablets get it. */
export async function workshopOf(app: TestApp): Promise<Workshop> {
  const { seq, zone, people, tools } = await getWorkshopView(app.db, READER, app.keys);
  return { seq, zone, people, tools };
}

/** Calls a handler as somebody who is signed in, or as a tablet. */
export async function ask(
  handler: Handler,
  {
    as,
    tablet,
    body,
    params,
    query = '',
    method,
    headers = {},
  }: {
    as?: Actor;
    tablet?: string;
    body?: unknown;
    params?: Record<string, string>;
    query?: string;
    method?: string;
    headers?: Record<string, string>;
  },
): Promise<{ status: number; body: unknown; headers: Headers; text: string }> {
  const isRaw = body instanceof Uint8Array || typeof body === 'string';
  const request = new Request(`http://localhost:4321/api/test${query}`, {
    method: method ?? (body === undefined ? 'GET' : 'POST'),
    headers: {
      ...(body === undefined ? {} : { 'content-type': 'application/json' }),
      ...(tablet === undefined ? {} : { authorization: `Tablet ${tablet}` }),
      ...headers,
    },
    ...(body === undefined ? {} : { body: isRaw ? new Blob([body as BlobPart]) : JSON.stringify(body) }),
  });
  const response = await handler({ request, params: params ?? {}, locals: { actor: as } });
  const text = await response.text();
  const isJson = response.headers.get('content-type')?.startsWith('application/json') ?? false;
  return {
    status: response.status,
    body: isJson ? JSON.parse(text) : undefined,
    headers: response.headers,
    text,
  };
}

export interface TestTablet extends ScriptedTablet {
  credential: string;
  shop: Shop;
}

/** Enrols a tablet, and on it a key for each of these people. */
export async function enrolTestTablet(
  shop: Shop,
  people: readonly Hand[],
  id: string = shop.app.ids.next(),
): Promise<TestTablet> {
  const { app } = shop;
  const enrolled = await ask(postDevices, {
    as: shop.people.owner,
    body: { id, name: `Tablet ${id.slice(-2)}` },
  });
  const { credential } = enrolled.body as { credential: string };
  const tablet = `${id}.${credential}`;
  const { sealingKey } = await getWorkshopView(app.db, READER, app.keys);
  const made = new ScriptedTablet({
    device: id,
    workshop: await workshopOf(app),
    sealingKey,
    newId: () => app.ids.next(),
    now: app.clock.now().getTime(),
    push: (body) => pushTo(tablet, body),
  });
  for (const person of people) {
    const { publicKey } = made.makeKey(person.id);
    await ask(postKeys, { as: person, tablet, body: { publicKey } });
  }
  made.workshop = await workshopOf(app);
  return Object.assign(made, { credential: tablet, shop });
}

/** Pushes to the real handler; anything but 200 fails the test. */
export async function pushTo(tablet: string, body: PushBody): Promise<PushAnswer> {
  const answer = await ask(postSync, { tablet, body });
  if (answer.status !== 200) throw new Error(`the push was answered ${answer.status}: ${answer.text}`);
  return answer.body as PushAnswer;
}

/** What the customer said, with the salts that the trail commits under. */
export function testIdentity(): Record<string, { value: string; salt: string }> {
  const salted = (value: string) => ({ value, salt: randomBytes(16).toString('hex') });
  return {
    registration: salted('TW71 ABC'),
    vin: salted('TEST0000000000001'),
    customerName: salted('Ada Testperson'),
    customerEmail: salted('ada@customer.example'),
  };
}

/** The commitments of such values. */
export function commitTo(identity: Record<string, { value: string; salt: string }>): Record<string, string> {
  return Object.fromEntries(
    Object.entries(identity).map(([field, { value, salt }]) => [
      field,
      createHmac('sha256', Buffer.from(salt, 'hex')).update(value.normalize('NFC')).digest('hex'),
    ]),
  );
}

export interface OpenedJob {
  id: string;
  plan: Plan;
  planHash: string;
  number: string;
}

/** What is sent to open a job, before it is sent. */
export async function prepareOpening(
  tablet: TestTablet,
  opener: Hand,
  over: { data?: Partial<EntryData<'opened'>>; change?: (entry: Entry) => Entry } = {},
): Promise<{ body: Record<string, unknown>; plan: Plan; planHash: string; job: string }> {
  const { app, people } = tablet.shop;
  const wanted = { route: 'test-route', options: { plate: 'fitted' } };
  const prepared = await ask(postPrepare, { as: opener, body: wanted });
  const {
    number,
    plan: planHash,
    planBody,
  } = prepared.body as { number: string; plan: string; planBody: Plan };
  const identity = testIdentity();
  const job = app.ids.next();
  const entry = {
    v: 1,
    id: app.ids.next(),
    job,
    plan: planHash,
    basis: 0,
    workshop: tablet.workshop.seq,
    kind: 'opened',
    by: opener.id,
    author: { name: opener.name, roles: [...opener.roles] },
    with: [],
    device: tablet.device,
    deviceSeq: 1,
    at: new Date(tablet.now).toISOString(),
    data: {
      number,
      engine: planBody.engine.name,
      options: planBody.options,
      odometer: { value: '120300', unit: 'km' },
      commitments: commitTo(identity),
      oldParts: 'to the customer',
      ...over.data,
    },
  } as Entry;
  const signed = await tablet.signed(over.change?.(entry) ?? entry, { by: opener });
  return { body: { ...signed, identity, people: [people.ann.id] }, plan: planBody, planHash, job };
}

/** Opens a job through the real handler, and takes it up on the tablet; its photographs are there beforehand. */
export async function openTestJob(
  tablet: TestTablet,
  opener: Hand,
  { photographs = true }: { photographs?: boolean } = {},
): Promise<OpenedJob> {
  const { body, plan, planHash, job } = await prepareOpening(tablet, opener);
  const answer = await ask(postJobs, { as: opener, body });
  if (answer.status !== 201) throw new Error(`opening was answered ${answer.status}: ${answer.text}`);
  tablet.takeUp(job, plan);
  await tablet.sync();
  if (photographs) {
    const subjects = plan.steps.flatMap((step) => (step.kind === 'photograph' ? [step.subject] : []));
    for (const subject of subjects) await keepTestPhoto(tablet.shop, subject);
  }
  return { ...(answer.body as { id: string; number: string }), plan, planHash };
}

/** Moves the server's clock to where the tablet's is, so that neither is off. */
export function setClocks(tablet: TestTablet): void {
  const { clock } = tablet.shop.app;
  clock.advance(tablet.now - clock.now().getTime());
}

/** The rows of a job's trail, in order. */
export async function trailOf(app: Pick<TestApp, 'db'>, job: string) {
  return app.db.selectFrom('job_entry').selectAll().where('job_id', '=', job).orderBy('seq').execute();
}
