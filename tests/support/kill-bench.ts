import { createHmac, randomBytes } from 'node:crypto';
import type { Entry } from '@/domain/entry';
import type { Plan } from '@/domain/plan';
import { type PushAnswer, type PushBody, ScriptedTablet } from '@db/scripted-tablet';
import type { RunningApp } from './app';

/*
 * A workshop in the running program, made over HTTP alone: its owner, who also works, and scripted tablets that
 * note what the server acknowledged to them.
 */

const owner = {
  name: 'Odile Testwright',
  email: 'odile@witnessmark.example',
  password: 'a long test password',
};

interface Asked {
  method?: string;
  body?: unknown;
  headers?: Record<string, string>;
}

/** A browser without a screen on the running program: it keeps its cookies and asks for JSON. */
class Client {
  private readonly cookies = new Map<string, string>();

  constructor(private readonly app: RunningApp) {}

  async ask<T>(path: string, { method, body, headers = {} }: Asked = {}): Promise<T> {
    const response = await fetch(`${this.app.url}${path}`, {
      method: method ?? (body === undefined ? 'GET' : 'POST'),
      headers: {
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
        cookie: [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; '),
        ...headers,
      },
      ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    });
    for (const line of response.headers.getSetCookie()) {
      const [, name = '', value = ''] = /^([^=]+)=([^;]*)/.exec(line) ?? [];
      this.cookies.set(name, value);
    }
    const text = await response.text();
    if (!response.ok) throw new Error(`${path} was answered ${response.status}: ${text}`);
    return JSON.parse(text) as T;
  }
}

/** A tablet, and what the server answered to have recorded of it, with the place that it gave. */
export interface BenchTablet {
  tablet: ScriptedTablet;
  acknowledged: Map<string, number>;
  /** Entries that the server had recorded before it died, without the tablet having heard of it. */
  heardLate: Set<string>;
}

export interface Bench {
  client: Client;
  tablets: BenchTablet[];
  person: { id: string; name: string; roles: string[] };
}

/** A workshop with its owner, who also works, and so many tablets. */
export async function openBench(app: RunningApp, tablets: number): Promise<Bench> {
  const client = new Client(app);
  const [, token] = /first-owner\?token=([\w-]{43})/.exec(app.output()) ?? [];
  const workshop = { name: 'Testwell Yard', zone: 'Europe/Lisbon' };
  await client.ask('/api/first-owner', { body: { token, ...owner, workshop } });
  const { email, password } = owner;
  const { personId } = await client.ask<{ personId: string }>('/api/auth/sign-in', {
    body: { email, password },
  });
  const roles = ['owner', 'supervisor'];
  await client.ask(`/api/people/${personId}`, { method: 'PATCH', body: { roles } });
  const person = { id: personId, name: owner.name, roles };
  const bench: Bench = { client, person, tablets: [] };
  for (let nth = 1; nth <= tablets; nth += 1) bench.tablets.push(await enrol(client, person, `Bay ${nth}`));
  return bench;
}

async function enrol(client: Client, person: Bench['person'], name: string): Promise<BenchTablet> {
  const device = newId();
  const acknowledged = new Map<string, number>();
  const heardLate = new Set<string>();
  const { credential } = await client.ask<{ credential: string }>('/api/devices', {
    body: { id: device, name },
  });
  const headers = { authorization: `Tablet ${device}.${credential}` };
  const workshop = await client.ask<
    ConstructorParameters<typeof ScriptedTablet>[0]['workshop'] & {
      sealingKey: { id: string; publicKey: string };
    }
  >('/api/workshop');
  const push = async (body: PushBody): Promise<PushAnswer> => {
    const answer = await client.ask<PushAnswer>('/api/sync', { body, headers });
    for (const { id, verdict, seq } of answer.verdicts) {
      if (verdict === 'already recorded' && !acknowledged.has(id)) heardLate.add(id);
      note(acknowledged, id, verdict, seq);
    }
    return answer;
  };
  const { sealingKey } = workshop;
  const tablet = new ScriptedTablet({ device, workshop, sealingKey, newId, now: Date.now(), push });
  await client.ask('/api/keys', { body: { publicKey: tablet.makeKey(person.id).publicKey }, headers });
  const { seq } = await client.ask<{ seq: number }>('/api/workshop');
  tablet.workshop = { ...workshop, seq };
  return { tablet, acknowledged, heardLate };
}

/** What was acknowledged once keeps its place for ever. */
function note(acknowledged: Map<string, number>, id: string, verdict: string, seq: number | undefined): void {
  if ((verdict !== 'recorded' && verdict !== 'already recorded') || seq === undefined)
    throw new Error(`${id} was answered "${verdict}".`);
  const before = acknowledged.get(id);
  if (before !== undefined && before !== seq)
    throw new Error(`${id} was number ${before}, and is now ${seq}.`);
  acknowledged.set(id, seq);
}

/** Opens a job on the first tablet; all of them take it up. */
export async function openBenchJob({ client, tablets, person }: Bench): Promise<string> {
  const [first] = tablets;
  if (first === undefined) throw new RangeError('A job is opened on a tablet.');
  const { job, plan } = await openJob(client, first.tablet, person);
  for (const { tablet } of tablets) {
    tablet.takeUp(job, plan);
    await tablet.sync();
  }
  return job;
}

async function openJob(
  client: Client,
  tablet: ScriptedTablet,
  person: Bench['person'],
): Promise<{ job: string; plan: Plan }> {
  const { routes } = await client.ask<{
    routes: { id: string; options: { id: string; choices: { id: string }[] }[] }[];
  }>('/api/routes');
  const [route] = routes;
  const options = Object.fromEntries(
    route?.options.map(({ id, choices }) => [id, choices[0]?.id ?? '']) ?? [],
  );
  const prepared = await client.ask<{ number: string; plan: string; planBody: Plan }>('/api/jobs/prepare', {
    body: { route: route?.id, options },
  });
  const identity = Object.fromEntries(
    Object.entries({
      registration: 'TW71 ABC',
      customerName: 'Ada Testperson',
      customerEmail: 'ada@customer.example',
    }).map(([field, value]) => [field, { value, salt: randomBytes(16).toString('hex') }]),
  );
  const commitments = Object.fromEntries(
    Object.entries(identity).map(([field, { value, salt }]) => [
      field,
      createHmac('sha256', Buffer.from(salt, 'hex')).update(value).digest('hex'),
    ]),
  );
  const job = newId();
  const entry = {
    v: 1,
    id: newId(),
    job,
    plan: prepared.plan,
    basis: 0,
    workshop: tablet.workshop.seq,
    kind: 'opened',
    by: person.id,
    author: { name: person.name, roles: person.roles },
    with: [],
    device: tablet.device,
    deviceSeq: 1,
    at: new Date(tablet.now).toISOString(),
    data: {
      number: prepared.number,
      engine: prepared.planBody.engine.name,
      options: prepared.planBody.options,
      odometer: { value: '120300', unit: 'km' },
      commitments,
      oldParts: 'to the customer',
    },
  } as Entry;
  const body = { ...(await tablet.signed(entry, { by: person })), identity, people: [] };
  await client.ask('/api/jobs', { body });
  return { job, plan: prepared.planBody };
}

function newId(): string {
  const hex = randomBytes(16).toString('hex');
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-7${hex.slice(13, 16)}-8${hex.slice(17, 20)}-${hex.slice(20)}`;
}
