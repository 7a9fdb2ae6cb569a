import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { main as verifyTrailCommand } from '@/commands/verify-trail';
import { contentOf, verifyTrail } from '@/domain/trail';
import type { Entry } from '@/domain/entry';
import { GET as getFloorJobs } from '@/pages/api/floor/jobs';
import { GET as getJob } from '@/pages/api/jobs/[id]/index';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { POST as postPeople } from '@/pages/api/jobs/[id]/people';
import { GET as getTrail } from '@/pages/api/jobs/[id]/trail';
import { GET as getJobs, POST as postJobs } from '@/pages/api/jobs/index';
import { POST as postPrepare } from '@/pages/api/jobs/prepare';
import { GET as getPlan } from '@/pages/api/plans/[hash]';
import { GET as getRoutes } from '@/pages/api/routes';
import { sha256Hex } from '@/server/crypto';
import { nodeChecks } from '@/server/trail-checks';
import { setActive } from '@/server/people';
import {
  ask,
  commitTo,
  enrolTestTablet,
  type HandName,
  type OpenedJob,
  openShop,
  openTestJob,
  prepareOpening,
  setClocks,
  type Shop,
  type TestTablet,
  testIdentity,
  trailOf,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;
let tablet: TestTablet;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben, owner } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, lead, ann, ben, owner]);
});

const everybody = ['owner', 'supervisor', 'lead', 'auditor', 'ann'] as const satisfies HandName[];

describe('preparing a job', () => {
  it('compiles the plan of the released documents and keeps it under its hash', async () => {
    const { supervisor } = shop.people;
    const answer = await ask(postPrepare, {
      as: supervisor,
      body: { route: 'test-route', options: { plate: 'none' } },
    });
    const { number, plan, planBody } = answer.body as { number: string; plan: string; planBody: object };
    expect(number).toBe('31-001');
    const kept = await ask(getPlan, { tablet: tablet.credential, params: { hash: plan } });
    expect(kept.body).toEqual(planBody);
    expect(sha256Hex(kept.text)).toBe(plan);
  });

  it('names the option that does not fit, and the route that is not there', async () => {
    const { supervisor } = shop.people;
    const wrong = await ask(postPrepare, { as: supervisor, body: { route: 'test-route', options: {} } });
    expect(wrong).toMatchObject({ status: 400, body: { error: { field: 'options' } } });
    const none = await ask(postPrepare, { as: supervisor, body: { route: 'nowhere', options: {} } });
    expect(none).toMatchObject({ status: 404 });
  });

  it('lists the routes with the options to ask', async () => {
    const answer = await ask(getRoutes, { as: shop.people.ann });
    expect(answer.body).toMatchObject({
      routes: [{ id: 'test-route', engine: { name: 'Testwell T4' }, options: [{ id: 'plate' }] }],
    });
  });
});

describe('opening a job', () => {
  it('puts its first entry into its trail and tells the workshop’s trail', async () => {
    const { supervisor, ann } = shop.people;
    const job = await openTestJob(tablet, supervisor);
    const rows = await trailOf(shop.app, job.id);
    expect(rows).toMatchObject([
      { seq: 1, kind: 'opened', by_person: supervisor.id, device_id: tablet.device },
    ]);
    const told = await shop.app.db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'job-opened')
      .executeTakeFirstOrThrow();
    expect(JSON.parse(told.body)).toMatchObject({
      data: { job: job.id, number: job.number, content: rows[0]!.content_hash },
    });
    const shown = await ask(getJob, { as: ann, params: { id: job.id } });
    expect(shown.body).toMatchObject({ number: job.number, phase: 'running', people: [{ id: ann.id }] });
  });

  it('keeps who and which vehicle out of the trail', async () => {
    const job = await openTestJob(tablet, shop.people.supervisor);
    const [row] = await trailOf(shop.app, job.id);
    expect(row!.body).not.toMatch(/TW71|Testperson|customer\.example/);
  });

  it('sent again after a lost answer is answered again and opens nothing more', async () => {
    const { supervisor } = shop.people;
    const { body } = await prepareOpening(tablet, supervisor);
    const first = await ask(postJobs, { as: supervisor, body });
    const again = await ask(postJobs, { as: supervisor, body });
    expect([first.status, again.status]).toEqual([201, 200]);
    expect(again.body).toEqual(first.body);
    const { db } = shop.app;
    expect(await db.selectFrom('job').selectAll().execute()).toHaveLength(1);
  });

  it('gives the next number, and refuses one that was taken meanwhile', async () => {
    const { supervisor } = shop.people;
    const early = await prepareOpening(tablet, supervisor);
    await openTestJob(tablet, supervisor);
    const late = await ask(postJobs, { as: supervisor, body: early.body });
    expect(late).toMatchObject({ status: 409, body: { error: { field: 'entry.data.number' } } });
    expect((await openTestJob(tablet, supervisor)).number).toBe('31-002');
  });

  const change = (over: Partial<Entry>) => ({ change: (entry: Entry) => ({ ...entry, ...over }) as Entry });

  it.each<[string, object]>([
    ['entry.by', change({ by: 'somebody' })],
    ['entry.basis', change({ basis: 3 })],
    ['entry.deviceSeq', change({ deviceSeq: 2 })],
    ['entry.plan', change({ plan: 'f'.repeat(64) })],
    ['entry.author', change({ author: { name: 'Somebody Else', roles: ['supervisor'] } })],
    ['entry.data.engine', { data: { engine: 'Another' } }],
    ['entry.data.options', { data: { options: { plate: 'none' } } }],
    ['entry', { data: { odometer: { value: 'many', unit: 'km' } } }],
    ['identity.registration', { data: { commitments: {} } }],
  ])('refuses an entry whose %s is wrong, and opens nothing', async (field, over) => {
    const { supervisor } = shop.people;
    const { body } = await prepareOpening(tablet, supervisor, over);
    const answer = await ask(postJobs, { as: supervisor, body });
    expect(answer).toMatchObject({ status: 400, body: { error: { field } } });
    expect(await shop.app.db.selectFrom('job').selectAll().execute()).toEqual([]);
  });

  it('refuses a value that is not the one committed to, and one that is missing', async () => {
    const { supervisor } = shop.people;
    const { body } = await prepareOpening(tablet, supervisor);
    const identity = body.identity as ReturnType<typeof testIdentity>;
    const other = { ...identity, vin: { ...identity.vin!, value: 'TEST0000000000002' } };
    const answer = await ask(postJobs, { as: supervisor, body: { ...body, identity: other } });
    expect(answer).toMatchObject({ status: 400, body: { error: { field: 'identity.vin' } } });
    const fewer = { ...identity, customerEmail: undefined };
    const less = await ask(postJobs, { as: supervisor, body: { ...body, identity: fewer } });
    expect(less).toMatchObject({ status: 400, body: { error: { field: 'identity.customerEmail' } } });
  });

  it('refuses a signature that does not fit, an unknown key, a field and a person that are not known', async () => {
    const { supervisor } = shop.people;
    const { body } = await prepareOpening(tablet, supervisor);
    const send = (over: object) => ask(postJobs, { as: supervisor, body: { ...body, ...over } });
    const signature = `${'A'.repeat(85)}A`;
    expect(await send({ signature })).toMatchObject({ status: 400, body: { error: { field: 'signature' } } });
    expect(await send({ key: 'f'.repeat(16) })).toMatchObject({
      status: 400,
      body: { error: { field: 'key' } },
    });
    expect(await send({ colour: 1 })).toMatchObject({ status: 400, body: { error: { field: 'colour' } } });
    expect(await send({ people: ['x'] })).toMatchObject({
      status: 400,
      body: { error: { field: 'people.0' } },
    });
  });

  it('takes values that were typed in another Unicode form', async () => {
    const { supervisor } = shop.people;
    const identity = { ...testIdentity() };
    identity.customerName = { ...identity.customerName!, value: 'Ada Te\u0301st' };
    const { body } = await prepareOpening(tablet, supervisor, { data: { commitments: commitTo(identity) } });
    expect(await ask(postJobs, { as: supervisor, body: { ...body, identity } })).toMatchObject({
      status: 201,
    });
  });
});

describe('who may', () => {
  it.each([
    [
      'prepare a job',
      postPrepare,
      { route: 'test-route', options: { plate: 'none' } },
      ['owner', 'supervisor'],
    ],
    ['open a job', postJobs, {}, ['owner', 'supervisor']],
  ] as const)('%s', async (_what, handler, body, allowed) => {
    for (const name of everybody) {
      const { status } = await ask(handler, { as: shop.people[name], body });
      expect(status === 403, name).toBe(!allowed.includes(name as never));
    }
    expect(await ask(handler, { body })).toMatchObject({ status: 401 });
  });

  it('put people on a job', async () => {
    const job = await openTestJob(tablet, shop.people.supervisor);
    const { ben, ann, owner } = shop.people;
    const put = (as: HandName, people: string[]) =>
      ask(postPeople, { as: shop.people[as], params: { id: job.id }, body: { people } });
    expect((await put('ann', [ann.id])).status).toBe(403);
    expect((await put('auditor', [ann.id])).status).toBe(403);
    expect((await put('supervisor', [ann.id, ben.id])).status).toBe(200);
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ben.id, false, shop.app));
    expect(await put('supervisor', [ben.id])).toMatchObject({
      status: 400,
      body: { error: { field: 'people.0' } },
    });
  });

  it('see a job, its trail and its export: technicians open ones and their own', async () => {
    const { supervisor, lead, ann, ben } = shop.people;
    const job = await openTestJob(tablet, supervisor);
    const see = async (name: HandName, handler: typeof getJob) =>
      (await ask(handler, { as: shop.people[name], params: { id: job.id } })).status;
    for (const name of everybody) expect(await see(name, getJob), name).toBe(200);
    expect(await see('ann', getTrail), 'put on the job').toBe(200);
    expect(await see('ben', getJob), 'an open job').toBe(200);
    expect(await see('ben', getTrail), 'no part in it').toBe(404);
    expect(await see('ben', getExport), 'no part in it').toBe(404);
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, {
      step: 'build.caps-marked',
    });
    await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit);
    setClocks(tablet);
    await tablet.sync();
    expect(await see('ben', getJob), 'a closed job of others').toBe(404);
    expect(await see('ann', getExport), 'a closed job of one’s own').toBe(200);
    expect(await ask(getExport, { params: { id: job.id } })).toMatchObject({ status: 401 });
    const mine = await ask(getJobs, { as: ben });
    expect(mine.body).toEqual({ jobs: [] });
    const all = await ask(getJobs, { as: shop.people.auditor, query: '?state=handed%20over' });
    expect(all.body).toMatchObject({
      jobs: [{ id: job.id, phase: 'handed over', done: expect.any(Number) }],
    });
  });

  it('know the customer: supervisor and owner alone', async () => {
    const job = await openTestJob(tablet, shop.people.supervisor);
    for (const name of everybody) {
      const { body } = await ask(getJob, { as: shop.people[name], params: { id: job.id } });
      const { identity, withheld } = body as { identity: Record<string, string>; withheld: string[] };
      const seesAll = name === 'owner' || name === 'supervisor';
      expect(Object.keys(identity).sort(), name).toEqual(
        seesAll ? ['customerEmail', 'customerName', 'registration', 'vin'] : ['registration', 'vin'],
      );
      expect(withheld.length, name).toBe(seesAll ? 0 : 2);
    }
  });
});

describe('lists', () => {
  it('come a page at a time and none twice', async () => {
    const { supervisor, auditor } = shop.people;
    for (let n = 0; n < 27; n += 1) {
      tablet.now += 60_000;
      await openTestJob(tablet, supervisor);
    }
    const first = await ask(getJobs, { as: auditor });
    const page = first.body as { jobs: { id: string }[]; cursor: string };
    expect(page.jobs).toHaveLength(25);
    const second = await ask(getJobs, { as: auditor, query: `?cursor=${encodeURIComponent(page.cursor)}` });
    const rest = second.body as { jobs: { id: string }[]; cursor?: string };
    expect(rest.jobs).toHaveLength(2);
    expect(rest).not.toHaveProperty('cursor');
    expect(new Set([...page.jobs, ...rest.jobs].map(({ id }) => id)).size).toBe(27);
    expect(await ask(getJobs, { as: auditor, query: '?cursor=nonsense' })).toMatchObject({ status: 400 });
    expect(await ask(getJobs, { as: auditor, query: '?colour=red' })).toMatchObject({ status: 400 });
  }, 30_000);

  it('for tablets hold no contact data', async () => {
    const job = await openTestJob(tablet, shop.people.supervisor);
    const answer = await ask(getFloorJobs, { tablet: tablet.credential });
    expect(answer.body).toMatchObject({
      jobs: [{ id: job.id, registration: 'TW71 ABC', phase: 'running', head: { seq: 1 } }],
    });
    expect(answer.text).not.toMatch(/Testperson|customer\.example/);
    expect(await ask(getFloorJobs, {})).toMatchObject({ status: 401 });
  });
});

describe('an export', () => {
  let job: OpenedJob;
  let text: string;
  const folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-export-'));
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  beforeEach(async () => {
    const { supervisor, lead, ann } = shop.people;
    job = await openTestJob(tablet, supervisor);
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, {
      step: 'build.caps-marked',
    });
    await tablet.sign(job.id, 'build.caps-marked', { by: supervisor });
    const wrong = { kind: 'done', data: {}, step: 'build.sump-on' } as const;
    await tablet.record(job.id, wrong, { by: ann, force: true });
    setClocks(tablet);
    await tablet.sync();
    text = (await ask(getExport, { as: shop.people.auditor, params: { id: job.id } })).text;
  });

  const verify = (file: string) => verifyTrail(Buffer.from(file), nodeChecks());

  it('is whole by its own account, server’s entries, signatures and heads included', async () => {
    const verdict = await verify(text);
    expect(verdict).toMatchObject({
      ok: true,
      heads: 1,
      key: shop.app.keys.head.fingerprint,
      notes: expect.arrayContaining(['customerName: withheld.', 'customerEmail: withheld.']),
    });
    const rows = await trailOf(shop.app, job.id);
    expect(rows.at(-1)).toMatchObject({ kind: 'refused' });
    expect(verdict).toMatchObject({ entries: rows.length, signatures: rows.length - 1 });
  });

  it('does not verify with any one byte changed', async () => {
    for (let at = 3; at < text.length; at += Math.floor(text.length / 40)) {
      const bytes = Buffer.from(text);
      bytes[at] = (bytes[at] ?? 0) ^ 1;
      const verdict = await verifyTrail(bytes, nodeChecks());
      expect(verdict.ok, `byte ${at}: ${text.slice(at - 20, at + 20)}`).toBe(false);
    }
  }, 60_000);

  it('holds what was recorded, exactly as the author signed it', async () => {
    const { body } = JSON.parse(text) as { body: { entries: { recorded: Entry; hash: string }[] } };
    const rows = await trailOf(shop.app, job.id);
    expect(body.entries.map(({ hash }) => hash)).toEqual(rows.map(({ hash }) => hash));
    const { default: canonicalize } = await import('canonicalize');
    expect(body.entries.map(({ recorded }) => sha256Hex(canonicalize(contentOf(recorded)) ?? ''))).toEqual(
      rows.map(({ content_hash }) => content_hash),
    );
  });

  it('is told of in the workshop’s trail, and reading the trail is not', async () => {
    const trail = await ask(getTrail, { as: shop.people.auditor, params: { id: job.id } });
    expect(await verify(trail.text)).toMatchObject({ ok: true });
    const told = await shop.app.db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'exported')
      .execute();
    expect(told.map(({ body }) => JSON.parse(body) as unknown)).toMatchObject([
      { by: shop.people.auditor.id, data: { job: job.id } },
    ]);
  });

  it('is verified by the command: 0 whole, 1 broken and where, 2 not a trail', async () => {
    const log = vi.spyOn(console, 'log').mockImplementation(() => undefined);
    const error = vi.mocked(console.error).mockImplementation(() => undefined);
    const file = (name: string, content: string) => {
      writeFileSync(path.join(folder, name), content);
      return name;
    };
    const run = (...args: string[]) => verifyTrailCommand(args, folder);
    expect(await run(file('whole.json', text))).toBe(0);
    expect(log.mock.lastCall?.[0]).toMatch(/^Whole: whole.json\n\d+ entries/);
    const { fingerprint } = shop.app.keys.head;
    const [head] = await shop.app.db.selectFrom('signed_head').selectAll().execute();
    expect(await run('whole.json', '--key', fingerprint, '--head', head!.hash)).toBe(0);
    expect(await run('whole.json', '--key', 'e'.repeat(64))).toBe(1);
    expect(await run('whole.json', '--head', 'e'.repeat(64))).toBe(1);
    expect(await run(file('broken.json', text.replace('"kind":"done"', '"kind":"read"')))).toBe(1);
    expect(error.mock.lastCall?.[0]).toMatch(/^Broken: broken.json\nAt entry \d+: /);
    expect(await run(file('other.json', '{"a":1}'))).toBe(2);
    expect(await run('nowhere.json')).toBe(2);
    expect(error.mock.lastCall?.[0]).toContain('there is no such file');
    expect(await run()).toBe(2);
    expect(await run('whole.json', '--key', 'short')).toBe(2);
    expect(await run('whole.json', '--colour')).toBe(2);
  });
});
