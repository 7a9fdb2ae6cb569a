/*
 * The workshop that every run begins with: people with PINs, tools, documents, jobs at three stages of the work,
 * and three tablets that hold them. Made once a process; a run gets copies of its files and rows.
 */
import 'fake-indexeddb/auto';
import { cpSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { createHash, createHmac, randomBytes, scryptSync, webcrypto } from 'node:crypto';
import sharp from 'sharp';
import { engineSchema, type EngineSheet } from '@/domain/document';
import type { Entry } from '@/domain/entry';
import type { Plan } from '@/domain/plan';
import type { Role } from '@/domain/role';
import { openOffline, type Offline } from '@/offline/offline';
import type { PreparedPhoto } from '@/offline/photo';
import { makeAvailableOffline, pullWorkshop } from '@/offline/prefetch';
import type { Outcome } from '@/offline/server-call';
import { runSync } from '@/offline/sync-run';
import { enrolAuthorKey, enrolTablet, rememberSignIn } from '@/offline/tablet';
import { POST as postJobs } from '@/pages/api/jobs/index';
import { POST as postPrepare } from '@/pages/api/jobs/prepare';
import type { Actor } from '@/server/actor';
import { storePhoto } from '@/server/photos';
import { addFirstOwner, addPerson } from '@/server/people';
import { storePin } from '@/server/pins';
import { releaseDocuments } from '@/server/released-documents';
import { documentHash } from '@/server/shipped-documents';
import { recordCalibration } from '@/server/calibrations';
import { addTool } from '@/server/tools';
import { getWorkshopView, setWorkshop } from '@/server/workshop';
import { type PushAnswer, ScriptedTablet } from '@db/scripted-tablet';
import type { Kit } from '@db/scripted-work';
import { classOf, goodReadings } from '../calibration';
import { smallEngine, smallProcedures, smallRoute } from '../small-documents';
import { openDisk, readRows, type Rows } from './disk';
import { countingIdsOf } from './seed';
import { openServer, type SimServer } from './server';

export const PIN = '280461';
const START = Date.parse('2031-05-06T07:00:00.000Z');
const HOUR = 3_600_000;

/** `cy` is on no tablet in the beginning. */
export type Name = 'owner' | 'supervisor' | 'second' | 'ann' | 'ben' | 'cy';
export type Person = Actor & { id: string };

/** The steps before which the jobs stand. */
const STAGES = ['strip.arrival', 'build.tighten@rod2', 'build.clear-to-close'] as const;

export interface Beginning {
  folder: string;
  now: number;
  people: Record<Name, Person>;
  jobs: string[];
  /** What each of the tablets holds. */
  disks: Rows[];
  photos: ReadonlyMap<string, PreparedPhoto>;
  kit: Kit;
}

let beginning: Promise<Beginning> | undefined;

/** The workshop as every run begins with it. */
export function theBeginning(): Promise<Beginning> {
  beginning ??= makeBeginning();
  return beginning;
}

/** A copy of the workshop's data folder for one run; remove it afterwards. */
export function copyFolder({ folder }: Pick<Beginning, 'folder'>): string {
  const copy = mkdtempSync(path.join(tmpdir(), 'witnessmark-run-'));
  cpSync(folder, copy, { recursive: true });
  return copy;
}

async function makeBeginning(): Promise<Beginning> {
  const folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-beginning-'));
  process.once('exit', () => rmSync(folder, { recursive: true, force: true }));
  let now = START;
  const onError = (line: string) => {
    throw new Error(line);
  };
  const server = await openServer({ folder, now: () => now, newId: countingIdsOf(0), onError });
  const people = await fillWorkshop(server);
  const photos = await developPhotos(server);
  const desk = await openDesk(server, people, now);
  const kit = kitOf(desk.workshop, photos);
  const jobs: string[] = [];
  for (const stage of STAGES) jobs.push(await openJobAt(server, desk, people, kit, stage));
  now = desk.now;
  const disks: Rows[] = [];
  for (const number of [1, 2, 3]) disks.push(await fillTablet(server, people, jobs, { number, now }));
  await server.close();
  return { folder, now, people, jobs, disks, photos, kit };
}

async function fillWorkshop({ app }: SimServer): Promise<Record<Name, Person>> {
  const roles: Record<Exclude<Name, 'owner'>, Role[]> = {
    supervisor: ['supervisor', 'quality lead'],
    second: ['supervisor'],
    ann: ['technician'],
    ben: ['technician'],
    cy: ['technician'],
  };
  const salt = randomBytes(16);
  // As cheap as the form allows: what is tried here is not how long guessing takes.
  const params = { N: 16, r: 1, p: 1, length: 32 };
  const hash = scryptSync(PIN, salt, params.length, params).toString('base64url');
  const pin = { hash, salt: salt.toString('base64url'), params: JSON.stringify(params) };
  return app.db.transaction().execute(async (trx) => {
    const owner = await addFirstOwner(
      trx,
      { name: 'Odile Testwright', email: 'owner@witnessmark.example' },
      app,
    );
    const people: Record<string, Person> = { owner: { ...owner, id: owner.personId } };
    for (const [name, held] of Object.entries(roles)) {
      const made = { name: `Test ${name}`, email: `${name}@witnessmark.example`, roles: held };
      const id = await addPerson(trx, owner, made, app);
      people[name] = { id, personId: id, name: made.name, roles: held, sessionId: undefined };
    }
    await setWorkshop(trx, owner, { name: 'Testwell Yard', zone: 'Europe/Lisbon' }, app);
    for (const person of Object.values(people)) await storePin(trx, person, pin, app);
    for (const [kind, serial, rangeHigh, unit] of TOOLS) {
      const range = { rangeLow: '0', rangeHigh, unit, dueOn: null, cycleLimit: null };
      const facts = { name: kind, kind, serial, ...range, ...classOf(kind) };
      const tool = await addTool(trx, owner, facts, app);
      const days = { on: '2031-01-10', dueOn: '2032-01-10' };
      const calibration = { ...days, certificate: `C-${serial}`, readings: goodReadings(facts) };
      await recordCalibration(trx, owner, tool.id, calibration, app);
    }
    const documents = [twoRods(), ...smallProcedures(), smallRoute()];
    const texts = documents.map((document) => ({ document, text: '', hash: documentHash(document) }));
    await releaseDocuments(trx, people.supervisor!, texts, app);
    return people;
  });
}

/** The small engine with two rods, so that a job is short. */
function twoRods(): EngineSheet {
  const four = smallEngine();
  const [first, second] = four.crankpins;
  return engineSchema.parse({ ...four, cylinders: 2, firingOrder: [1, 2], crankpins: [first, second] });
}

const TOOLS = [
  ['torque wrench', 'TW-1', '60', 'N·m'],
  ['angle gauge', 'AG-1', '360', 'deg'],
] as const;

/** Real small pictures, so that the server can see that they are some. */
async function developPhotos(server: SimServer): Promise<ReadonlyMap<string, PreparedPhoto>> {
  const photos = new Map<string, PreparedPhoto>();
  for (const [index, subject] of ['arrival', 'another', 'a third'].entries()) {
    const background = { r: 40 + index * 60, g: 90, b: 120 };
    const jpeg = await sharp({ create: { width: 8, height: 6, channels: 3, background } })
      .jpeg()
      .toBuffer();
    const bytes = new Uint8Array(jpeg);
    const hash = createHash('sha256').update(bytes).digest('hex');
    photos.set(subject, { hash, bytes: bytes.buffer, type: 'image/jpeg', width: 8, height: 6 });
  }
  const arrival = photos.get('arrival')!;
  const sent = { hash: arrival.hash, bytes: new Uint8Array(arrival.bytes), type: arrival.type };
  await storePhoto(server.app, sent, undefined);
  return photos;
}

function kitOf(workshop: Kit['workshop'], photos: ReadonlyMap<string, PreparedPhoto>): Kit {
  const photo = (subject: string) => {
    const { hash, bytes, type } = photos.get(subject) ?? photos.get('another')!;
    return { hash, bytes: bytes.byteLength, type };
  };
  return { workshop, today: '2031-05-06', photo };
}

/** The office's own browser, from which jobs are opened and the work before a run is recorded. */
async function openDesk(
  server: SimServer,
  people: Record<Name, Person>,
  now: number,
): Promise<ScriptedTablet> {
  const newId = countingIdsOf(1);
  const device = newId();
  const json = (body: unknown, credential?: string) => ({
    method: 'POST',
    headers: {
      'content-type': 'application/json',
      ...(credential === undefined ? {} : { authorization: `Tablet ${device}.${credential}` }),
    },
    body: JSON.stringify(body),
  });
  const enrolled = await server.answer('/api/devices', json({ id: device, name: 'Desk' }), people.owner);
  const { credential } = JSON.parse(enrolled.text) as { credential: string };
  const view = () => getWorkshopView(server.app.db, people.owner, server.app.keys);
  const tablet = new ScriptedTablet({
    device,
    newId,
    now,
    workshop: await view(),
    sealingKey: (await view()).sealingKey,
    push: async (body) => {
      const { text } = await server.answer('/api/sync', json(body, credential), undefined);
      return JSON.parse(text) as PushAnswer;
    },
  });
  for (const person of [people.supervisor, people.ann, people.ben]) {
    const { publicKey } = tablet.makeKey(person.id);
    await server.answer('/api/keys', json({ publicKey }, credential), person);
  }
  tablet.workshop = await view();
  return tablet;
}

/** Opens a job and works on it until a step is next; the answer is its id. */
async function openJobAt(
  { app }: SimServer,
  desk: ScriptedTablet,
  people: Record<Name, Person>,
  kit: Kit,
  stage: string,
): Promise<string> {
  const ask = async (handler: typeof postJobs, body: unknown) => {
    const headers = { 'content-type': 'application/json' };
    const init = { method: 'POST', headers, body: JSON.stringify(body) };
    const request = new Request('http://localhost:4321/api/jobs', init);
    const answer = await handler({ request, params: {}, locals: { actor: people.supervisor } });
    return (await answer.json()) as unknown;
  };
  const prepared = (await ask(postPrepare, { route: 'test-route', options: { plate: 'fitted' } })) as {
    number: string;
    plan: string;
    planBody: Plan;
  };
  const signer = { ...people.supervisor, roles: [...people.supervisor.roles], pin: PIN };
  const entry = opening(desk, signer, prepared, app.ids.next());
  const { identity, commitments } = identityOf();
  entry.data = { ...entry.data, commitments } as Entry['data'];
  const signed = await desk.signed(entry, { by: signer });
  await ask(postJobs, { ...signed, identity, people: [people.ann.id, people.ben.id] });
  desk.takeUp(entry.job, prepared.planBody);
  await desk.sync();
  const technician = { ...people.ann, roles: [...people.ann.roles] };
  await desk.perform(entry.job, { technician, supervisor: signer }, kit, { step: stage });
  const verdicts = await desk.sync();
  const bad = verdicts.find(({ verdict, code }) => verdict !== 'recorded' || code !== undefined);
  if (bad) throw new Error(`The work before the run: ${JSON.stringify(bad)}`);
  return entry.job;
}

function opening(
  desk: ScriptedTablet,
  by: { id: string; name: string; roles: string[] },
  { number, plan, planBody }: { number: string; plan: string; planBody: Plan },
  job: string,
): Entry {
  return {
    ...{
      v: 1,
      id: job.replace(/^01/, '02'),
      job,
      plan,
      basis: 0,
      workshop: desk.workshop.seq,
      kind: 'opened',
    },
    ...{ by: by.id, author: { name: by.name, roles: by.roles }, with: [], device: desk.device, deviceSeq: 1 },
    at: new Date(desk.now).toISOString(),
    data: {
      number,
      engine: planBody.engine.name,
      options: planBody.options,
      odometer: { value: '120300', unit: 'km' },
      commitments: {},
      oldParts: 'to the customer',
    },
  };
}

function identityOf() {
  const values = {
    registration: 'TW71 ABC',
    vin: 'TEST0000000000001',
    customerName: 'Ada Testperson',
    customerEmail: 'ada@customer.example',
  };
  const identity: Record<string, { value: string; salt: string }> = {};
  const commitments: Record<string, string> = {};
  for (const [field, value] of Object.entries(values)) {
    const salt = randomBytes(16);
    identity[field] = { value, salt: salt.toString('hex') };
    commitments[field] = createHmac('sha256', salt).update(value).digest('hex');
  }
  return { identity, commitments };
}

/** Enrols a tablet, signs everybody in on it and brings the jobs; gives what is then on its disk. */
async function fillTablet(
  server: SimServer,
  people: Record<Name, Person>,
  jobs: readonly string[],
  { number, now }: { number: number; now: number },
): Promise<Rows> {
  let session: Person = people.owner;
  const offline: Offline = openOffline({
    run: runSync,
    db: openDisk(`beginning-${process.pid}-${number}`, 'present'),
    fetch: async (address, init = {}) => {
      const { status, text } = await server.answer(address, init, session);
      return new Response(text, { status });
    },
    now: () => now,
    newId: countingIdsOf(1 + number),
    random: () => 0.5,
    subtle: webcrypto.subtle as SubtleCrypto,
    after: () => () => undefined,
  });
  must(await enrolTablet(offline, `Bay ${number}`));
  for (const person of [people.ann, people.ben, people.second, people.supervisor]) {
    session = person;
    const sessionUntil = new Date(now + 400 * HOUR).toISOString();
    const { id, name, roles } = person;
    await rememberSignIn(offline, { person: id, name, roles: [...roles], sessionUntil });
    must(await enrolAuthorKey(offline, id));
  }
  must(await pullWorkshop(offline));
  for (const job of jobs) must(await makeAvailableOffline(offline, job));
  const rows = await readRows(offline.db);
  await offline.db.delete();
  return rows;
}

function must(outcome: Outcome): void {
  if (!outcome.ok) throw new Error(`${outcome.why} (${outcome.code})`);
}
