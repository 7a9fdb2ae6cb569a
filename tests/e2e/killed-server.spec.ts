import { createHmac, randomBytes } from 'node:crypto';
import { expect, test } from '@playwright/test';
import { canonicalJson } from '@/domain/canonical';
import type { Entry } from '@/domain/entry';
import type { Plan } from '@/domain/plan';
import { verifyTrail } from '@/domain/trail';
import { nodeChecks } from '@/server/trail-checks';
import { type PushAnswer, type PushBody, ScriptedTablet } from '@db/scripted-tablet';
import { type RunningApp, startApp } from '../support/app';

/*
 * The server is killed as by a power cut while a tablet pushes one batch after another. What it acknowledged
 * before it died is there after, once and in its order, and the chain holds.
 */

const KILLS = 10;
const SEED = 20_260_602;
const owner = {
  name: 'Odile Testwright',
  email: 'odile@witnessmark.example',
  password: 'a long test password',
};

/** Numbers from 0 to 1 that are the same in every run (mulberry32, a common generator). */
function seededRandom(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
  };
}

interface Asked {
  method?: string;
  body?: unknown;
  headers?: Record<string, string>;
}

/** A browser without a screen: it keeps its cookies and asks for JSON. */
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

interface Bench {
  client: Client;
  tablet: ScriptedTablet;
  person: { id: string; name: string; roles: string[] };
  job: string;
  /** What the server answered to have recorded, with the place that it gave. */
  acknowledged: Map<string, number>;
}

/** A workshop with its owner, who also works, one tablet and one open job. */
async function openBench(app: RunningApp): Promise<Bench> {
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
  const acknowledged = new Map<string, number>();
  const tablet = await enrol(client, person, acknowledged);
  return { client, tablet, person, job: await openJob(client, tablet, person), acknowledged };
}

async function enrol(
  client: Client,
  person: Bench['person'],
  acknowledged: Map<string, number>,
): Promise<ScriptedTablet> {
  const device = newId();
  const { credential } = await client.ask<{ credential: string }>('/api/devices', {
    body: { id: device, name: 'Bay 1' },
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
      expect(['recorded', 'already recorded'], `${id} ${verdict}`).toContain(verdict);
      const before = acknowledged.get(id);
      // What was acknowledged once keeps its place for ever.
      if (before !== undefined) expect(seq).toBe(before);
      acknowledged.set(id, seq ?? 0);
    }
    return answer;
  };
  const { sealingKey } = workshop;
  const tablet = new ScriptedTablet({ device, workshop, sealingKey, newId, now: Date.now(), push });
  await client.ask('/api/keys', { body: { publicKey: tablet.makeKey(person.id).publicKey }, headers });
  const { seq } = await client.ask<{ seq: number }>('/api/workshop');
  tablet.workshop = { ...workshop, seq };
  return tablet;
}

async function openJob(client: Client, tablet: ScriptedTablet, person: Bench['person']): Promise<string> {
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
  tablet.takeUp(job, prepared.planBody);
  await tablet.sync();
  return job;
}

function newId(): string {
  const hex = randomBytes(16).toString('hex');
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-7${hex.slice(13, 16)}-8${hex.slice(17, 20)}-${hex.slice(20)}`;
}

/** Records and pushes without a pause until the server is gone. */
async function pushUntilKilled(bench: Bench, random: () => number, isKilled: () => boolean): Promise<void> {
  const { tablet, person, job } = bench;
  for (;;) {
    const size = 1 + Math.floor(random() * 20);
    for (let n = 0; n < size; n += 1) {
      const data = { class: 'C', words: `remark ${Math.floor(random() * 1e6)}`, blocks: false } as const;
      await tablet.record(job, { kind: 'deviation-raised', data }, { by: person, afterMs: 10 });
    }
    try {
      await tablet.sync();
    } catch (error) {
      // Only what a dead server does to a connection; a wrong answer is a fault.
      if (!isKilled() || !(error instanceof TypeError)) throw error;
      return;
    }
  }
}

test('a server that is killed at any moment has everything that it acknowledged, once and in order', async () => {
  test.setTimeout(180_000);
  const app = await startApp({ DEMO: 'off' });
  try {
    const bench = await openBench(app);
    const random = seededRandom(SEED);
    for (let kill = 0; kill < KILLS; kill += 1) {
      let isKilled = false;
      const killed = new Promise<void>((resolve, reject) => {
        setTimeout(
          () => {
            isKilled = true;
            app.kill().then(resolve, reject);
          },
          20 + random() * 400,
        );
      });
      await pushUntilKilled(bench, random, () => isKilled);
      await killed;
      await app.restart();
    }
    await bench.tablet.sync();
    await expectWhole(bench);
  } finally {
    await app.dispose();
  }
});

async function expectWhole({ client, tablet, job, acknowledged }: Bench): Promise<void> {
  const trail = await client.ask<{
    body: {
      entries: { recorded: { id: string; seq: number; kind: string; device: string; deviceSeq: number } }[];
    };
  }>(`/api/jobs/${job}/trail`);
  const response = await client.ask<unknown>(`/api/jobs/${job}/export`);
  const recorded = trail.body.entries.map((entry) => entry.recorded);
  expect(acknowledged.size).toBeGreaterThan(KILLS);
  for (const [id, seq] of acknowledged) {
    expect(
      recorded.filter((one) => one.id === id).map((one) => one.seq),
      id,
    ).toEqual([seq]);
  }
  expect(recorded.map(({ seq }) => seq)).toEqual(recorded.map((_, index) => index + 1));
  expect(recorded.map(({ deviceSeq }) => deviceSeq)).toEqual(recorded.map((_, index) => index + 1));
  // The tablet made nothing that is not there, and has nothing left to send.
  expect(tablet.held(job).outbox).toEqual([]);
  expect(tablet.held(job).state.count).toBe(recorded.length);
  expect(await verifyTrail(canonicalJson(response), nodeChecks())).toMatchObject({ ok: true });
}
