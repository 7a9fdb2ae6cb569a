import { createHmac, randomBytes, randomUUID } from 'node:crypto';
import type { Entry } from '@/domain/entry';
import { nextSteps } from '@/domain/job';
import type { Workshop } from '@/domain/job-state';
import type { Plan, PlanStep } from '@/domain/plan';
import { type PushAnswer, type PushBody, ScriptedTablet, type ScriptedPerson } from '@db/scripted-tablet';
import type { Kit, ScriptedEntry } from '@db/scripted-work';
import { demoSignIns } from '@db/seed';

/*
 * The demo workshop from outside, over HTTP: people who sign in, a scripted tablet with its keys, and jobs
 * opened and worked on through it as a real tablet would.
 */

const HOUR = 3_600_000;
const OPTIONS = { steering: 'electric', 'front-axle': 'not-driven', plate: 'none' };

/** The shipped route with the most to record, and the one with the most touches a cap. */
export type RouteId = 'corvane-v8-rod-bearings' | 'merrow-s6-rod-bearings';

/** Somebody who is signed in. */
export interface SignedIn extends ScriptedPerson {
  cookie: string;
  email: string;
  password: string;
}

/** The demo's workshop with a tablet on which a technician and a supervisor have keys. */
export interface BenchWorkshop {
  url: string;
  technician: SignedIn;
  supervisor: SignedIn;
  tablet: ScriptedTablet;
  credential: string;
  kit: Kit;
}

/** Signs two people of the demo in, enrols a tablet and their keys on it. */
export async function openWorkshop(url: string): Promise<BenchWorkshop> {
  const technician = await signIn(url, 'technician');
  const supervisor = await signIn(url, 'supervisor');
  const device = randomUUID();
  const enrolled = await ask<{ credential: string }>(url, '/api/devices', {
    as: supervisor,
    body: { id: device, name: 'Bench' },
  });
  const credential = `${device}.${enrolled.credential}`;
  const { workshop, sealingKey } = await readWorkshop(url, supervisor);
  const push = (body: PushBody) => ask<PushAnswer>(url, '/api/sync', { tablet: credential, body });
  const now = shiftStart();
  const tablet = new ScriptedTablet({ device, workshop, sealingKey, newId: randomUUID, now, push });
  for (const person of [technician, supervisor]) {
    const { publicKey } = tablet.makeKey(person.id);
    await ask(url, '/api/keys', { as: person, tablet: credential, body: { publicKey } });
  }
  tablet.workshop = (await readWorkshop(url, supervisor)).workshop;
  const today = new Date().toISOString().slice(0, 10);
  return {
    url,
    technician,
    supervisor,
    tablet,
    credential,
    kit: { workshop: tablet.workshop, today, photo },
  };
}

/** Opens a job for the plainest vehicle; its trail and its plan are then on the scripted tablet. */
export async function openJob(workshop: BenchWorkshop, route: RouteId): Promise<string> {
  const { url, supervisor, technician, tablet } = workshop;
  const prepared = await ask<{ number: string; plan: string; planBody: Plan }>(url, '/api/jobs/prepare', {
    as: supervisor,
    body: { route, options: OPTIONS },
  });
  tablet.now = shiftStart();
  const entry = openingEntry(workshop, prepared);
  const signed = await tablet.signed(entry, { by: supervisor });
  const body = { ...signed, identity: IDENTITY, people: [technician.id] };
  await ask(url, '/api/jobs', { as: supervisor, body });
  tablet.takeUp(entry.job, prepared.planBody);
  await tablet.sync();
  return entry.job;
}

/**
 * Works on a job, hold points signed if asked, until it has at least so many entries and a step of such a kind
 * is next. What is missing when the work ends there is made up by tools that are taken up.
 */
export async function workOn(
  workshop: BenchWorkshop,
  job: string,
  until: { entries: number; signs: boolean; next?: (step: PlanStep, made: number) => boolean },
): Promise<void> {
  const { tablet, technician, supervisor, kit } = workshop;
  const held = () => tablet.held(job);
  // One tablet, and yet each job has a day of its own.
  tablet.now = Date.parse(held().state.lastAt ?? new Date(shiftStart()).toISOString());
  for (;;) {
    const { state } = held();
    const [step] = nextSteps(state);
    if (step !== undefined && until.next?.(step, state.count) === true) break;
    if (until.next === undefined && state.count >= until.entries) break;
    const made = await tablet.perform(job, { technician, supervisor }, kit, {
      entries: 1,
      signs: until.signs,
    });
    if (made === 0) break;
  }
  while (held().state.count < until.entries) {
    await tablet.record(job, takenTool(kit, held().state.count), { by: technician });
  }
  if (tablet.now > Date.now()) throw new RangeError('The scripted shift ended in the future.');
}

/** Asks the server; anything but a good answer is an error with its words. */
export async function ask<T>(
  url: string,
  path: string,
  { as, tablet, body }: { as?: SignedIn; tablet?: string; body?: unknown },
): Promise<T> {
  const response = await fetch(`${url}${path}`, {
    method: body === undefined ? 'GET' : 'POST',
    headers: {
      origin: url,
      ...(as === undefined ? {} : { cookie: as.cookie }),
      ...(tablet === undefined ? {} : { authorization: `Tablet ${tablet}` }),
      ...(body === undefined ? {} : { 'content-type': 'application/json' }),
    },
    ...(body === undefined ? {} : { body: JSON.stringify(body) }),
  });
  const text = await response.text();
  if (!response.ok) throw new Error(`${path} was answered ${response.status}: ${text}`);
  return JSON.parse(text) as T;
}

async function signIn(url: string, role: 'technician' | 'supervisor'): Promise<SignedIn> {
  const demo = demoSignIns.find(({ roles }) => roles.includes(role));
  if (demo === undefined) throw new RangeError(`The demo has no ${role}.`);
  const { email, password, pin } = demo;
  const response = await fetch(`${url}/api/auth/sign-in`, {
    method: 'POST',
    headers: { origin: url, 'content-type': 'application/json' },
    body: JSON.stringify({ email, password }),
  });
  if (!response.ok) throw new Error(`Signing in was answered ${response.status}: ${await response.text()}`);
  const { personId, name, roles } = (await response.json()) as {
    personId: string;
    name: string;
    roles: string[];
  };
  const cookie = response.headers
    .getSetCookie()
    .map((set) => set.split(';')[0])
    .join('; ');
  return { id: personId, name, roles, pin, cookie, email, password };
}

async function readWorkshop(
  url: string,
  as: SignedIn,
): Promise<{ workshop: Workshop; sealingKey: { id: string; publicKey: string } }> {
  const { seq, zone, people, tools, sealingKey } = await ask<
    Workshop & { sealingKey: { id: string; publicKey: string } }
  >(url, '/api/workshop', { as });
  return { workshop: { seq, zone, people, tools }, sealingKey };
}

function openingEntry(
  { tablet, supervisor }: BenchWorkshop,
  { number, plan, planBody }: { number: string; plan: string; planBody: Plan },
): Entry {
  return {
    v: 1,
    id: randomUUID(),
    job: randomUUID(),
    plan,
    basis: 0,
    workshop: tablet.workshop.seq,
    kind: 'opened',
    by: supervisor.id,
    author: { name: supervisor.name, roles: supervisor.roles },
    with: [],
    device: tablet.device,
    deviceSeq: 1,
    at: new Date(tablet.now).toISOString(),
    data: {
      number,
      engine: planBody.engine.name,
      options: planBody.options,
      odometer: { value: '120300', unit: 'km' },
      commitments: commitments(),
      oldParts: 'to the customer',
    },
  };
}

/** An invented customer and vehicle. */
const IDENTITY = Object.fromEntries(
  Object.entries({
    registration: 'BE71 NCH',
    vin: 'TEST0000000000002',
    customerName: 'Ada Testperson',
    customerEmail: 'ada@customer.example',
  }).map(([field, value]) => [field, { value, salt: randomBytes(16).toString('hex') }]),
);

function commitments(): Record<string, string> {
  return Object.fromEntries(
    Object.entries(IDENTITY).map(([field, { value, salt }]) => [
      field,
      createHmac('sha256', Buffer.from(salt, 'hex')).update(value).digest('hex'),
    ]),
  );
}

/** A torque wrench that is taken up, a different one each time. */
function takenTool({ workshop }: Kit, count: number): Omit<ScriptedEntry, 'part' | 'afterMs'> {
  const wrenches = workshop.tools.filter(({ kind }) => kind === 'torque wrench');
  const wrench = wrenches[count % wrenches.length];
  if (wrench === undefined) throw new RangeError('The demo has no torque wrench.');
  const { id, name, serial, dueOn } = wrench;
  return { kind: 'tool-taken', data: { use: 'torque', tool: { id, name, serial, dueOn } } };
}

/** Early enough that a whole scripted job ends before now. */
function shiftStart(): number {
  return Date.now() - 20 * HOUR;
}

function photo(subject: string): { hash: string; bytes: number; type: 'image/jpeg' } {
  return {
    hash: createHmac('sha256', 'photo').update(subject).digest('hex'),
    bytes: 1000,
    type: 'image/jpeg',
  };
}
