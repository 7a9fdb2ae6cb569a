import { createHash } from 'node:crypto';
import sharp from 'sharp';
import type { EntryData } from '@/domain/entry';
import { type HandlerContext, listOperations, type Operation } from '@/server/http';
import { addPerson } from '@/server/people';
import {
  ask,
  enrolTestTablet,
  openShop,
  prepareOpening,
  type Hand,
  type Shop,
  type TestTablet,
  type OpenedJob,
  openTestJob,
} from './tablet';
import { TEST_PASSWORD } from './requests';

/*
 * Every operation of the API with what it takes when all is well, so that a test can spoil one thing at a time.
 * An operation that is not in the table fails the tests that go through it.
 */

type Handler = (context: HandlerContext) => Promise<Response>;

const modules = import.meta.glob<Record<string, Handler>>('/src/pages/api/**/*.ts', { eager: true });

export const nameOf = ({ method, path }: Pick<Operation, 'method' | 'path'>) => `${method} ${path}`;

/** Every operation that the program has. */
export function allOperations(): Operation[] {
  // Loading the route modules above is what filled the list; tests may have added some of their own.
  return listOperations().filter((operation) => findHandler(operation) !== undefined);
}

/** The route handler of an operation. */
export function handlerOf(operation: Operation): Handler {
  const handler = findHandler(operation);
  if (handler === undefined) throw new RangeError(`${nameOf(operation)} has no route.`);
  return handler;
}

function findHandler({ method, path }: Operation): Handler | undefined {
  const file = `/src/pages${path.replace(/\{(\w+)\}/g, '[$1]')}`;
  return (modules[`${file}.ts`] ?? modules[`${file}/index.ts`])?.[method];
}

/** What one operation takes when all is well. */
export interface Sent {
  params?: Record<string, string>;
  body?: unknown;
  query?: string;
  /** Who asks, where the owner may not or is not enough. */
  as?: Hand;
}

export interface Table {
  shop: Shop;
  tablet: TestTablet;
  job: OpenedJob;
  sent: Record<string, Sent>;
}

/** Opens a workshop in which every operation has something to work on. */
export async function openTable(): Promise<Table> {
  const shop = await openShop();
  const { owner, supervisor, ann } = shop.people;
  const tablet = await enrolTestTablet(shop, [supervisor, owner, ann]);
  const job = await openTestJob(tablet, supervisor);
  const photo = await sharp({ create: { width: 60, height: 40, channels: 3, background: '#784828' } })
    .jpeg()
    .toBuffer();
  const photoHash = createHash('sha256').update(photo).digest('hex');
  const photographed: EntryData<'photographed'> = {
    photo: photoHash,
    bytes: photo.byteLength,
    type: 'image/jpeg',
    from: 'camera here',
    subject: 'arrival',
  };
  await tablet.record(job.id, { kind: 'photographed', data: photographed }, { by: ann });
  await tablet.sync();
  const opening = await prepareOpening(tablet, owner);
  await tablet.record(
    job.id,
    { kind: 'deviation-raised', data: { class: 'C', words: 'in a file', blocks: false } },
    { by: ann },
  );
  const inFile = tablet.held(job.id).outbox.splice(0);
  const tool = shop.kit.workshop.tools.find(({ kind }) => kind === 'torque wrench')?.id ?? '';
  const day = { on: '2031-05-01', dueOn: '2032-05-01' };
  const { publicKey } = tablet.makeKey('spare');
  const { id: key } = await shop.app.db
    .selectFrom('author_key')
    .select('id')
    .where('person_id', '=', owner.id)
    .executeTakeFirstOrThrow();
  const newcomer = await shop.app.db.transaction().execute((trx) => {
    const person = { name: 'New', email: 'new@witnessmark.example', roles: ['technician'] as const };
    return addPerson(trx, owner, person, shop.app);
  });
  const secret = 'A'.repeat(43);
  const workshop = { name: 'Testwell Yard', zone: 'Europe/Lisbon' };
  const sent: Record<string, Sent> = {
    'POST /api/auth/sign-in': { body: { email: owner.email, password: TEST_PASSWORD } },
    'POST /api/auth/sign-out': { body: { person: ann.id } },
    'POST /api/auth/switch': { body: { person: ann.id } },
    'GET /api/devices': {},
    'POST /api/devices': { body: { id: shop.app.ids.next(), name: 'Bay 9' } },
    'POST /api/devices/file': {
      body: {
        v: 1,
        format: 'witnessmark-tablet',
        tablet: tablet.device,
        savedAt: '2031-05-06T07:00:00.000Z',
        clockOffsetMs: 0,
        entries: inFile,
      },
    },
    'PATCH /api/devices/{id}': { params: { id: tablet.device }, body: { name: 'Bay 3', state: 'active' } },
    'POST /api/first-owner': {
      body: {
        token: secret,
        name: 'Odile',
        email: 'o@witnessmark.example',
        password: TEST_PASSWORD,
        workshop,
      },
    },
    'GET /api/floor/jobs': {},
    'GET /api/jobs': {},
    'POST /api/jobs': { body: opening.body },
    'POST /api/jobs/prepare': { body: { route: 'test-route', options: { plate: 'fitted' } } },
    'GET /api/jobs/{id}': { params: { id: job.id } },
    'GET /api/jobs/{id}/export': { params: { id: job.id } },
    'GET /api/jobs/{id}/set-aside': { params: { id: job.id } },
    'GET /api/jobs/{id}/trail': { params: { id: job.id } },
    'POST /api/jobs/{id}/people': { params: { id: job.id }, body: { people: [ann.id] } },
    'GET /api/keys': {},
    'POST /api/keys': { body: { publicKey } },
    'POST /api/keys/{id}/revoke': { params: { id: key }, body: {} },
    'GET /api/me': {},
    'POST /api/me/password': { body: { current: TEST_PASSWORD, next: TEST_PASSWORD } },
    'GET /api/openapi.json': {},
    'GET /api/people': {},
    'POST /api/people': { body: { name: 'Wren', email: 'wren@witnessmark.example', roles: ['technician'] } },
    'GET /api/people/{id}': { params: { id: ann.id } },
    'PATCH /api/people/{id}': {
      params: { id: newcomer },
      body: {
        name: 'Newly Added',
        roles: ['technician', 'auditor'],
        active: true,
        authorisation: {
          certificate: { number: 'T-1', kind: 'technician' },
          authorisedUntil: '2032-01-01',
        },
      },
    },
    'POST /api/people/{id}/password-link': { params: { id: ann.id }, body: {} },
    'GET /api/photos/{hash}': { params: { hash: photoHash } },
    'PUT /api/photos/{hash}': { params: { hash: photoHash }, body: photo },
    'GET /api/pins': {},
    'POST /api/pins': { body: { pin: '731958', password: TEST_PASSWORD } },
    'POST /api/pins/check': { body: { pin: '280461' } },
    'GET /api/plans/{hash}': { params: { hash: job.planHash } },
    'GET /api/routes': {},
    'POST /api/set-password': { body: { token: secret, password: TEST_PASSWORD } },
    'POST /api/sync': {
      body: {
        device: tablet.device,
        sentAt: '2031-05-06T07:00:00.000Z',
        jobs: [{ id: job.id, have: { seq: 1, hash: 'e'.repeat(64) } }],
        entries: [],
      },
    },
    'GET /api/tools': {},
    'POST /api/tools': {
      body: {
        name: 'Wrench',
        kind: 'torque wrench',
        serial: 'TW-9',
        rangeLow: '2',
        rangeHigh: '60',
        unit: 'N·m',
        torqueType: 'II',
        torqueClass: 'A',
        cycleLimit: 5000,
      },
    },
    'GET /api/tools/{id}': { params: { id: tool } },
    'GET /api/tools/{id}/use': { params: { id: tool } },
    'PATCH /api/tools/{id}': {
      params: { id: tool },
      body: { name: 'Wrench 2', kind: 'torque wrench', serial: 'TW-2', state: 'in use', cycleLimit: null },
    },
    'POST /api/tools/{id}/calibrations': {
      params: { id: tool },
      body: { ...day, certificate: 'C-9', readings: [{ set: '20', reference: '20.1', unit: 'N·m' }] },
    },
    'GET /api/workshop': {},
    'PUT /api/workshop': { body: workshop },
    'GET /api/workshop/trail': {},
    'PUT /api/workshop/units': { body: { shown: 'inch and pound' } },
    'GET /api/workshop/witness': {},
    'PUT /api/workshop/witness': { body: { address: 'witness@witness.example' } },
    // Refused until an address was chosen.
    'POST /api/workshop/witness': { body: {} },
    'GET /api/mail': {},
    // Refused while the job is running.
    'POST /api/jobs/{id}/erase': {
      params: { id: job.id },
      body: { fields: ['customerName'], photographs: [], reason: 'asked for' },
    },
  };
  return { shop, tablet, job, sent };
}

/** What an operation takes when all is well; an operation that the table lacks is an error. */
export function sentFor({ sent }: Table, operation: Operation): Sent {
  const found = sent[nameOf(operation)];
  if (found === undefined) throw new RangeError(`Tell api-table.ts what ${nameOf(operation)} takes.`);
  return found;
}

export interface Over extends Sent {
  headers?: Record<string, string>;
  /** Asks as nobody, without a session and without a tablet. */
  isNobody?: boolean;
  tablet?: string | undefined;
}

/** Calls an operation with what it takes, but for what is given. */
export async function call(table: Table, operation: Operation, over: Over = {}) {
  const { shop, tablet } = table;
  const { params, body, query, as = shop.people.owner } = { ...sentFor(table, operation), ...over };
  const isTablet = operation.who === 'tablet' || operation.who === 'session and tablet';
  const isSession = operation.who !== 'tablet' && operation.who !== 'anyone';
  const type = isRaw(operation) ? { 'content-type': 'image/jpeg' } : {};
  return ask(handlerOf(operation), {
    method: operation.method,
    ...(over.isNobody !== true && isSession ? { as } : {}),
    ...(over.isNobody !== true && isTablet ? { tablet: over.tablet ?? tablet.credential } : {}),
    ...(params === undefined ? {} : { params }),
    ...(operation.body === undefined ? {} : { body }),
    ...(query === undefined ? {} : { query }),
    headers: { ...type, ...over.headers },
  });
}

/** Whether an operation takes bytes that are not JSON. */
export function isRaw({ body }: Operation): boolean {
  return body !== undefined && 'raw' in body;
}
