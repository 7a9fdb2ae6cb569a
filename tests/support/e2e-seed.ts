import { createHash, createHmac, randomBytes, randomUUID } from 'node:crypto';
import { type APIRequestContext, request } from '@playwright/test';
import { v7 } from 'uuid';
import type { Entry } from '@/domain/entry';
import type { Workshop } from '@/domain/job-state';
import type { Plan } from '@/domain/plan';
import { type PushAnswer, type ScriptedPerson, ScriptedTablet } from '@db/scripted-tablet';
import type { Kit } from '@db/scripted-work';
import type { DemoSignIn } from '@db/seed';
import type { RunningApp } from './app';
import { demoPerson } from './e2e-people';
import { picture } from './e2e-picture';

/*
 * Jobs that stand where a test begins, made through the program's own addresses by a tablet without a screen:
 * nothing is written past the server.
 */

/** A job in the running program, and the tablet that brought it there. */
export interface SeededJob {
  id: string;
  number: string;
  plan: Plan;
}

export interface SeedOptions {
  /** The step that is to be done next; the job is only opened if left out. */
  until?: string | ((plan: Plan) => string | undefined) | undefined;
  technician?: DemoSignIn;
  /** People put on the job; the technician unless given. */
  people?: DemoSignIn[];
  /** What the technician does after that, before all of it is sent. */
  then?: (tablet: ScriptedTablet, job: string, technician: ScriptedPerson) => Promise<void>;
}

type Signed = ScriptedPerson & { api: APIRequestContext };

const HOUR = 60 * 60 * 1000;
const OPTIONS = { steering: 'electric', 'front-axle': 'not-driven', plate: 'none' };

/** Opens a job for the six and does everything before a step, under the demo's names. */
export async function seedJob(app: RunningApp, options: SeedOptions = {}): Promise<SeededJob> {
  const { technician = demoPerson('ines'), people = [technician], until, then } = options;
  const supervisor = await signInToApi(app, demoPerson('supervisor'));
  const worker = await signInToApi(app, technician);
  const tablet = await enrol(supervisor, worker);
  const job = await open(tablet, supervisor, people);
  const step = typeof until === 'function' ? until(job.plan) : until;
  if (step !== undefined) {
    const photographs = await takePhotographs(job.plan);
    const kit = kitOf(tablet, photographs);
    await tablet.perform(job.id, { technician: worker, supervisor }, kit, { step });
    await then?.(tablet, job.id, worker);
    await sendAsOfNow(tablet);
    await keepPhotographs(worker.api, photographs);
  }
  return job;
}

/** Signs somebody in at a browser without a screen. */
export function signInToApi(app: RunningApp, person: DemoSignIn): Promise<Signed> {
  const known = signedIn.get(app) ?? new Map<string, Promise<Signed>>();
  signedIn.set(app, known);
  const signed = known.get(person.email) ?? startSession(app, person);
  known.set(person.email, signed);
  return signed;
}

/** One session a person and server: so many sign-ins from one address within a minute would be too many. */
const signedIn = new WeakMap<RunningApp, Map<string, Promise<Signed>>>();

async function startSession(app: RunningApp, person: DemoSignIn): Promise<Signed> {
  const api = await request.newContext({ baseURL: app.url });
  const { email, password, name, pin, roles } = person;
  const answer = await api.post('/api/auth/sign-in', { data: { email, password } });
  const { personId } = (await bodyOf(answer)) as { personId: string };
  return { id: personId, name, pin, roles: [...roles], api };
}

type SeedTablet = ScriptedTablet & { credential: string };

async function enrol(...people: [Signed, ...Signed[]]): Promise<SeedTablet> {
  const [first] = people;
  const id = randomUUID();
  const { credential } = (await post(first.api, '/api/devices', { id, name: 'Bay 3' })) as {
    credential: string;
  };
  const headers = { authorization: `Tablet ${id}.${credential}` };
  const { sealingKey, ...workshop } = (await bodyOf(await first.api.get('/api/workshop'))) as Workshop & {
    sealingKey: { id: string; publicKey: string };
  };
  const tablet = new ScriptedTablet({
    device: id,
    workshop,
    sealingKey,
    newId: () => v7(),
    // The work lies behind us: the tablet was without a network while it was done.
    now: Date.now() - 7 * HOUR,
    push: async (body) => (await post(first.api, '/api/sync', body, headers)) as PushAnswer,
  });
  for (const person of people) {
    const { publicKey } = tablet.makeKey(person.id);
    const { workshop: seq } = (await post(person.api, '/api/keys', { publicKey }, headers)) as {
      workshop: number;
    };
    tablet.workshop = { ...tablet.workshop, seq };
  }
  return Object.assign(tablet, { credential });
}

async function open(tablet: SeedTablet, opener: Signed, people: DemoSignIn[]): Promise<SeededJob> {
  const wanted = { route: 'merrow-s6-rod-bearings', options: OPTIONS };
  const prepared = (await post(opener.api, '/api/jobs/prepare', wanted)) as {
    number: string;
    plan: string;
    planBody: Plan;
  };
  const { number, plan: planHash, planBody: plan } = prepared;
  const identity = salted({
    registration: 'KV 63 TRB',
    vin: 'WTNSMRKXXMS600077',
    customerName: 'Jorunn Falkmere',
    customerEmail: 'jorunn@customer.example',
  });
  const entry = {
    v: 1,
    id: v7(),
    job: v7(),
    plan: planHash,
    basis: 0,
    workshop: tablet.workshop.seq,
    kind: 'opened',
    by: opener.id,
    author: { name: opener.name, roles: opener.roles },
    with: [],
    device: tablet.device,
    deviceSeq: 1,
    at: new Date(tablet.now).toISOString(),
    data: {
      number,
      engine: plan.engine.name,
      options: plan.options,
      odometer: { value: '98450', unit: 'km' },
      commitments: commitTo(identity),
      oldParts: 'to the customer',
    },
  } as Entry;
  const signed = await tablet.signed(entry, { by: opener });
  const listed = (await bodyOf(await opener.api.get('/api/workshop'))) as Workshop;
  const ids = people.map(({ name }) => listed.people.find((one) => one.name === name)?.id);
  const { id } = (await post(opener.api, '/api/jobs', { ...signed, identity, people: ids })) as {
    id: string;
  };
  tablet.takeUp(id, plan);
  await tablet.sync();
  return { id, number, plan };
}

/** The work was done earlier, and is sent now. */
async function sendAsOfNow(tablet: ScriptedTablet): Promise<void> {
  tablet.now = Date.now();
  const verdicts = await tablet.sync();
  const trouble = verdicts.find(({ verdict }) => verdict !== 'recorded');
  if (trouble !== undefined) throw new Error(`The seeded work was not taken: ${JSON.stringify(trouble)}`);
}

interface Photograph {
  hash: string;
  bytes: Buffer;
}

/** A picture for every photograph that the plan asks for, by its subject. */
async function takePhotographs({ steps }: Plan): Promise<Map<string, Photograph>> {
  const subjects = steps.flatMap((step) => (step.kind === 'photograph' ? [step.subject] : []));
  const taken = await Promise.all(
    subjects.map(async (subject, nth) => {
      const bytes = await picture(nth);
      return [subject, { bytes, hash: createHash('sha256').update(bytes).digest('hex') }] as const;
    }),
  );
  return new Map(taken);
}

/** The bytes follow the record, as they do from a tablet. */
async function keepPhotographs(api: APIRequestContext, photographs: Map<string, Photograph>): Promise<void> {
  for (const { hash, bytes } of photographs.values()) {
    await bodyOf(
      await api.put(`/api/photos/${hash}`, { data: bytes, headers: { 'content-type': 'image/jpeg' } }),
    );
  }
}

function kitOf({ workshop }: ScriptedTablet, photographs: Map<string, Photograph>): Kit {
  const photo = (subject: string) => {
    const taken = photographs.get(subject);
    if (taken === undefined) throw new RangeError(`Nobody took a picture of: ${subject}.`);
    return { hash: taken.hash, bytes: taken.bytes.byteLength, type: 'image/jpeg' as const };
  };
  return { workshop, today: new Date().toISOString().slice(0, 10), photo };
}

type Identity = Record<string, { value: string; salt: string }>;

function salted(values: Record<string, string>): Identity {
  return Object.fromEntries(
    Object.entries(values).map(([field, value]) => [field, { value, salt: randomBytes(16).toString('hex') }]),
  );
}

function commitTo(identity: Identity): Record<string, string> {
  return Object.fromEntries(
    Object.entries(identity).map(([field, { value, salt }]) => [
      field,
      createHmac('sha256', Buffer.from(salt, 'hex')).update(value.normalize('NFC')).digest('hex'),
    ]),
  );
}

async function post(
  api: APIRequestContext,
  path: string,
  data: unknown,
  headers: Record<string, string> = {},
): Promise<unknown> {
  return bodyOf(await api.post(path, { data, headers }));
}

async function bodyOf(answer: Awaited<ReturnType<APIRequestContext['get']>>): Promise<unknown> {
  if (!answer.ok()) throw new Error(`${answer.url()} answered ${answer.status()}: ${await answer.text()}`);
  return answer.json();
}
