import { createHash, randomBytes } from 'node:crypto';
import { identityCommitment } from '@/domain/trail';
import type { Entry } from '@/domain/entry';
import { nextSteps } from '@/domain/job';
import type { Plan } from '@/domain/plan';
import { parseRoles } from '@/server/actor';
import { enrolKey } from '@/server/author-keys';
import { type Clock, DAY, HOUR, MINUTE } from '@/server/clock';
import type { App } from '@/server/compose';
import { type Device, enrolDevice } from '@/server/devices';
import { hmacSha256 } from '@/server/job-identity';
import { nextJobNumber, openJob } from '@/server/job-opening';
import { storePhoto } from '@/server/photos';
import { preparePlan } from '@/server/plans';
import { syncTablet } from '@/server/sync';
import { type SyncBody, syncBodySchema } from '@/server/sync-body';
import { syncAnswerJson } from '@/server/sync-pull';
import { getWorkshopView } from '@/server/workshop';
import { drawPicture } from './demo-pictures';
import { type PushAnswer, type ScriptedPerson, ScriptedTablet } from './scripted-tablet';
import type { Kit } from './scripted-work';

/*
 * The demo's jobs. They are not written into the tables: invented tablets record them, sign every entry with
 * real keys and push them, so that what the demo shows is what the program does.
 */

/** A clock that the seed moves, so that its past lies in the past. */
export interface SeedClock extends Clock {
  set(ms: number): void;
}

/** A clock that stands until it is set. */
export function seedClock(ms: number): SeedClock {
  let at = ms;
  return {
    now: () => new Date(at),
    set: (next) => {
      at = next;
    },
  };
}

interface DemoJob {
  route: string;
  options: Record<string, string>;
  odometer: string;
  customer: { name: string; email: string; phone: string };
  registration: string;
  vin: string;
  complaint: string;
  promisedInDays: number;
  openedDaysAgo: number;
  openedAtHour: number;
  technicians: readonly string[];
  /** How far it has come. */
  until: { step?: (plan: Plan) => string | undefined; entries?: number };
  clearance?: Kit['clearance'];
}

const PLAIN = { steering: 'electric', 'front-axle': 'not-driven', plate: 'none' };

const JOBS: readonly DemoJob[] = [
  {
    route: 'merrow-s6-rod-bearings',
    options: { ...PLAIN, steering: 'hydraulic', plate: 'fitted' },
    odometer: '148230',
    customer: { name: 'Perpetua Wrenfield', email: 'perpetua@wrenfield.example', phone: '00 1632 960 114' },
    registration: 'QX21 MRW',
    vin: 'XM9S6LYE5NB004217',
    complaint: 'Oil analysis showed copper; no noise yet.',
    promisedInDays: -8,
    openedDaysAgo: 13,
    openedAtHour: 8,
    technicians: ['ines', 'halloran'],
    until: {},
    // Rod 5 came out wide on the first shells and right on the second: the demo's one rework.
    clearance: (rod, end, nth) =>
      rod === 5 && nth === 0
        ? end === 'front'
          ? 0.078
          : 0.076
        : 0.046 + ((rod * 7 + (end === 'rear' ? 3 : 0)) % 5) * 0.001,
  },
  {
    route: 'merrow-s6-rod-bearings',
    options: PLAIN,
    odometer: '96410',
    customer: { name: 'Caspar Thistledown', email: 'caspar@thistledown.example', phone: '00 1632 960 205' },
    registration: 'QB19 TDN',
    vin: 'XM9S6LYE3KB001982',
    complaint: 'Knock when warm, above 2,000 rev/min.',
    promisedInDays: 1,
    openedDaysAgo: 4,
    openedAtHour: 8,
    technicians: ['ines', 'bram'],
    until: { step: middleOfCaps, entries: 1400 },
    clearance: (rod, end) => 0.045 + ((rod * 5 + (end === 'rear' ? 2 : 0)) % 6) * 0.001,
  },
  {
    route: 'corvane-v8-rod-bearings',
    options: PLAIN,
    odometer: '71880',
    customer: { name: 'Odalys Fernhollow', email: 'odalys@fernhollow.example', phone: '00 1632 960 377' },
    registration: 'QK70 CRV',
    vin: 'XC8V8LYE7LC000631',
    complaint: 'Renewal by distance; runs well.',
    promisedInDays: 4,
    openedDaysAgo: 1,
    openedAtHour: 9,
    technicians: ['bram'],
    until: { entries: 4 },
  },
  {
    route: 'merrow-s6-rod-bearings',
    options: { ...PLAIN, 'front-axle': 'driven' },
    odometer: '121070',
    customer: { name: 'Leopold Ashgrove', email: 'leopold@ashgrove.example', phone: '00 1632 960 448' },
    registration: 'QN68 ASH',
    vin: 'XM9S6LYE1JB003305',
    complaint: 'Oil pressure low at idle, warm.',
    promisedInDays: 5,
    openedDaysAgo: 1,
    openedAtHour: 13,
    technicians: ['halloran'],
    until: { entries: 26 },
  },
];

/** The start of the final fit of a rod about half way along, in the order of the work. */
function middleOfCaps(plan: Plan): string | undefined {
  const fits = plan.steps.filter((step) => step.kind === 'tighten' && step.fit === 'final');
  return fits[Math.floor(fits.length / 2)]?.id;
}

/** How long before now the demo workshop begins; its people, tools and documents are older than its jobs. */
export const DEMO_DAYS = 15;

/** Fills the demo workshop with jobs, whose past the clock is moved through; `signIns` says who has which PIN. */
export async function seedDemoJobs(
  app: App,
  clock: SeedClock,
  nowMs: number,
  signIns: readonly { email: string; pin: string }[],
): Promise<void> {
  const demo = { ...app, clock };
  const people = await readPeople(app, signIns);
  clock.set(nowMs - 14 * DAY);
  const shop = await openShop(demo, people, clock);
  for (const job of JOBS) await doJob(shop, job, nowMs);
}

interface Shop {
  app: App;
  clock: SeedClock;
  people: ReadonlyMap<string, ScriptedPerson>;
  tablet: ScriptedTablet;
  device: Device;
}

async function readPeople(
  app: App,
  signIns: readonly { email: string; pin: string }[],
): Promise<ReadonlyMap<string, ScriptedPerson>> {
  const rows = await app.db.selectFrom('person').select(['id', 'printed_name', 'email', 'roles']).execute();
  return new Map(
    rows.map(({ id, printed_name: name, email, roles }) => {
      const mailbox = email.split('@')[0] ?? email;
      const pin = signIns.find((signIn) => signIn.email === email)?.pin;
      return [mailbox, { id, name, roles: parseRoles(roles), pin }];
    }),
  );
}

async function openShop(
  app: App,
  people: ReadonlyMap<string, ScriptedPerson>,
  clock: SeedClock,
): Promise<Shop> {
  const id = app.ids.next();
  const actor = (person: ScriptedPerson) => ({
    personId: person.id,
    name: person.name,
    roles: parseRoles(JSON.stringify(person.roles)),
    sessionId: undefined,
  });
  const owner = required(people, 'owner');
  const { device } = await app.db
    .transaction()
    .execute((trx) => enrolDevice(trx, actor(owner), { id, name: 'Bay 2' }, app));
  const { sealingKey } = await getWorkshopView(app.db, device, app.keys);
  const tablet = new ScriptedTablet({
    device: id,
    workshop: { seq: 0, zone: 'UTC', people: [], tools: [] },
    sealingKey,
    newId: () => app.ids.next(),
    now: clock.now().getTime(),
    push: async (body) => {
      clock.set(tablet.now + 400);
      const read: SyncBody = syncBodySchema.parse(body);
      return JSON.parse(syncAnswerJson(await syncTablet(app, device, read))) as PushAnswer;
    },
  });
  for (const person of people.values()) {
    if (!person.roles.some((role) => role === 'technician' || role === 'supervisor')) continue;
    const { publicKey } = tablet.makeKey(person.id);
    await app.db.transaction().execute((trx) => enrolKey(trx, actor(person), device, { publicKey }, app));
  }
  return { app, clock, people, tablet, device };
}

async function doJob(shop: Shop, demo: DemoJob, nowMs: number): Promise<void> {
  const { app, tablet, people } = shop;
  tablet.now = startOf(nowMs, demo);
  shop.clock.set(tablet.now);
  const { seq, zone, people: all, tools } = await getWorkshopView(app.db, shop.device, app.keys);
  tablet.workshop = { seq, zone, people: all, tools };
  const { id, plan } = await open(shop, demo);
  tablet.takeUp(id, plan);
  await tablet.sync();
  const supervisor = required(people, 'supervisor');
  const pictures = new Map<string, Buffer>();
  const kit: Kit = {
    workshop: tablet.workshop,
    today: new Date(tablet.now).toISOString().slice(0, 10),
    photo: (subject) => ({ ...photoOf(pictures.get(subject)), type: 'image/jpeg' }),
    clearance: demo.clearance,
  };
  const stop = demo.until.step?.(plan);
  let left = demo.until.entries ?? Number.POSITIVE_INFINITY;
  let shift = 0;
  for (;;) {
    const technician = required(people, demo.technicians[shift % demo.technicians.length] ?? '');
    const made = await tablet.perform(id, { technician, supervisor }, kit, {
      ...(stop === undefined ? {} : { step: stop }),
      entries: Math.min(40, left),
      pace: 3,
      between: (step) =>
        step.kind === 'photograph'
          ? takePicture(shop, `${id} ${step.subject}`, step.subject, pictures)
          : undefined,
    });
    await tablet.sync();
    left -= made;
    if (made === 0 || left <= 0) break;
    if (isEvening(tablet.now) && nextSteps(tablet.held(id).state).length > 0) {
      await tablet.signWork(id, technician);
      tablet.now = nextMorning(tablet.now);
      shift += 1;
      const by = required(people, demo.technicians[shift % demo.technicians.length] ?? '');
      await tablet.record(
        id,
        { kind: 'took-over', data: { from: technician.id, firstOfShift: true } },
        { by },
      );
    }
  }
  await finish(shop, id, demo, nowMs);
}

/** A job under way has its last touch a few minutes ago, in the middle of a cap if it has come so far. */
async function finish(shop: Shop, id: string, demo: DemoJob, nowMs: number): Promise<void> {
  const { tablet, people } = shop;
  const { state } = tablet.held(id);
  const [next] = nextSteps(state);
  if (next?.kind !== 'tighten' || next.fit !== 'final') return;
  tablet.now = Math.max(tablet.now, nowMs - 20 * MINUTE);
  const technician = required(people, demo.technicians.at(-1) ?? '');
  const supervisor = required(people, 'supervisor');
  const kit: Kit = {
    workshop: tablet.workshop,
    today: new Date(tablet.now).toISOString().slice(0, 10),
    photo: () => {
      throw new RangeError('Nothing is photographed in the middle of a cap.');
    },
  };
  await tablet.record(id, { kind: 'took-over', data: { firstOfShift: true } }, { by: technician });
  await tablet.perform(id, { technician, supervisor }, kit, { entries: 11 });
  await tablet.sync();
}

async function open(shop: Shop, demo: DemoJob): Promise<{ id: string; plan: Plan }> {
  const { app, tablet, people } = shop;
  const opener = required(people, 'supervisor');
  const actor = {
    personId: opener.id,
    name: opener.name,
    roles: parseRoles(JSON.stringify(opener.roles)),
    sessionId: undefined,
  };
  const { hash, plan, number } = await app.db.transaction().execute(async (trx) => ({
    ...(await preparePlan(trx, actor, demo, app)),
    number: await nextJobNumber(trx, actor, app),
  }));
  const identity = identityOf(demo);
  const id = app.ids.next();
  const promisedOn = new Date(tablet.now + (demo.promisedInDays + demo.openedDaysAgo) * DAY);
  const entry = {
    v: 1,
    id: app.ids.next(),
    job: id,
    plan: hash,
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
      odometer: { value: demo.odometer, unit: 'km' },
      commitments: Object.fromEntries(
        Object.entries(identity).map(([field, value]) => [field, identityCommitment(value, hmacSha256)]),
      ),
      oldParts: 'packed and given back with the vehicle',
      promisedOn: promisedOn.toISOString().slice(0, 10),
    },
  } as Entry;
  const technicians = demo.technicians.map((mailbox) => required(people, mailbox).id);
  const signed = await tablet.signed(entry, { by: opener });
  await openJob(app, actor, {
    entry,
    signature: signed.signature,
    key: signed.key,
    identity,
    people: technicians,
  });
  return { id, plan };
}

function identityOf(demo: DemoJob): Record<string, { value: string; salt: string }> {
  const { customer, registration, vin, complaint } = demo;
  const values = {
    registration,
    vin,
    customerName: customer.name,
    customerEmail: customer.email,
    customerPhone: customer.phone,
    complaint,
    approver: customer.name,
  };
  return Object.fromEntries(
    Object.entries(values).map(([field, value]) => [field, { value, salt: randomBytes(16).toString('hex') }]),
  );
}

async function takePicture(
  { app, device }: Shop,
  seed: string,
  subject: string,
  pictures: Map<string, Buffer>,
): Promise<void> {
  if (pictures.has(subject)) return;
  const bytes = await drawPicture(seed);
  pictures.set(subject, bytes);
  await storePhoto(app, { hash: photoOf(bytes).hash, bytes, type: 'image/jpeg' }, device);
}

function photoOf(bytes: Buffer | undefined): { hash: string; bytes: number } {
  if (bytes === undefined) throw new RangeError('This picture was not drawn.');
  return { hash: createHash('sha256').update(bytes).digest('hex'), bytes: bytes.byteLength };
}

/** Work begins in the morning or after the break, so many days before today. */
function startOf(nowMs: number, { openedDaysAgo, openedAtHour }: DemoJob): number {
  return (Math.floor(nowMs / DAY) - openedDaysAgo) * DAY + openedAtHour * HOUR;
}

function isEvening(ms: number): boolean {
  return ms % DAY > 16.5 * HOUR;
}

function nextMorning(ms: number): number {
  return (Math.floor(ms / DAY) + 1) * DAY + 8 * HOUR;
}

function required(people: ReadonlyMap<string, ScriptedPerson>, mailbox: string): ScriptedPerson {
  const person = people.get(mailbox);
  if (person === undefined) throw new RangeError(`The demo has nobody called "${mailbox}".`);
  return person;
}
