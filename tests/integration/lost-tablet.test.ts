import { beforeEach, describe, expect, it, vi } from 'vitest';
import { PATCH as patchDevice } from '@/pages/api/devices/[id]';
import { POST as postSync } from '@/pages/api/sync/index';
import type { Entry } from '@/domain/entry';
import { getFold } from '@/server/job-fold';
import { workshopLines, type WorkshopRecord } from '@/domain/workshop-words';
import type { PushedEntry } from '@db/scripted-tablet';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  pushTo,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const HOLD = 'build.caps-marked';
const REASON = 'left in the van of the tyre man';

let shop: Shop;
let office: TestTablet;
let lost: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben } = shop.people;
  office = await enrolTestTablet(shop, [supervisor, lead, ann, ben]);
  lost = await enrolTestTablet(shop, [ann, ben, lead, supervisor]);
  job = await openTestJob(office, supervisor);
  lost.takeUp(job.id, job.plan);
  await lost.sync();
});

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

const rags = { kind: 'counted', step: 'strip.rags-out', data: { count: 12 } } as const;

const raise = (words: string) => lost.record(job.id, remark(words), { by: shop.people.ann });

const change = (body: object, as = shop.people.supervisor) =>
  ask(patchDevice, { method: 'PATCH', as, params: { id: lost.device }, body });

const declare = () => change({ state: 'lost', reason: REASON });

const state = async (of: OpenedJob = job) => (await getFold(shop.app.db, of.id)).state;

const kinds = async (of: OpenedJob = job) => (await trailOf(shop.app, of.id)).map(({ kind }) => kind);

/** Past its own outbox, as if the tablet had it only later. */
const pushOf = async (entries: PushedEntry[], tablet: TestTablet = lost) => {
  const sentAt = new Date(tablet.now).toISOString();
  return (await pushTo(tablet.credential, { device: tablet.device, sentAt, jobs: [], entries })).verdicts;
};

describe('declaring a tablet lost', () => {
  it('is told in each open job in which it ever recorded, from the first number that never came', async () => {
    const { supervisor } = shop.people;
    const other = await openTestJob(office, supervisor);
    await raise('one');
    await raise('two');
    await lost.sync();
    await raise('never sent');
    expect(await declare()).toMatchObject({ status: 200, body: { state: 'lost' } });
    const last = (await trailOf(shop.app, job.id)).at(-1)!;
    expect(JSON.parse(last.body)).toMatchObject({
      kind: 'tablet-lost',
      by: 'workshop',
      data: { tablet: lost.device, from: 3 },
    });
    expect(last.signature).toBeNull();
    expect((await state()).deviations.at(-1)).toMatchObject({
      rule: 'tablet-lost',
      class: 'A',
      blocks: true,
      words: 'A tablet was declared lost; its records from number 3 on never came.',
    });
    expect(await kinds(other)).not.toContain('tablet-lost');
  });

  it('stands in the workshop’s trail with the reason, the person and the jobs', async () => {
    await raise('one');
    await lost.sync();
    await declare();
    const row = await shop.app.db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'tablet-lost')
      .executeTakeFirstOrThrow();
    const entry = JSON.parse(row.body) as WorkshopRecord;
    const { id, name } = shop.people.supervisor;
    expect(entry).toMatchObject({ by: id, author: { name }, data: { reason: REASON, jobs: [job.id] } });
    expect(workshopLines([entry])[0]?.words).toContain(`declared lost: ${REASON}`);
  });

  it('needs a reason, and a supervisor or the owner', async () => {
    await raise('one');
    await lost.sync();
    const before = await trailOf(shop.app, job.id);
    expect(await change({ state: 'lost' })).toMatchObject({
      status: 400,
      body: { error: { code: 'invalid-field', field: 'reason' } },
    });
    for (const as of [shop.people.ann, shop.people.lead, shop.people.auditor])
      expect((await change({ state: 'lost', reason: REASON }, as)).status).toBe(403);
    expect(await trailOf(shop.app, job.id)).toEqual(before);
    expect((await change({ state: 'lost', reason: REASON }, shop.people.owner)).status).toBe(200);
  });

  it('again does no harm, and is not told twice from the same number', async () => {
    await raise('one');
    await lost.sync();
    await declare();
    await declare();
    await change({ state: 'active' });
    await declare();
    expect((await kinds()).filter((kind) => kind === 'tablet-lost')).toHaveLength(1);
  });

  it('says nothing in a job that has ended', async () => {
    await raise('one');
    await lost.sync();
    const { supervisor } = shop.people;
    await office.sync();
    await office.record(
      job.id,
      { kind: 'ended-unfinished', data: { reason: 'fetched by its owner', open: [], notToBeRun: true } },
      { by: supervisor },
    );
    await office.sync();
    const before = await kinds();
    await declare();
    expect(await kinds()).toEqual(before);
  });
});

describe('what waits for a lost tablet', () => {
  it('is judged anew: a signature whose evidence never came is refused in words, and none is spent on its PIN', async () => {
    const { ann, lead, supervisor } = shop.people;
    await raise('so that it is known in the job');
    await lost.sync();
    await office.sync();
    await office.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step: HOLD });
    setClocks(office);
    await office.sync();
    await office.sign(job.id, HOLD, {
      by: supervisor,
      change: (entry) => {
        const signed = entry as Entry & { kind: 'signed' };
        const { covers } = signed.data;
        const upTo = { ...covers.upTo, [lost.device]: 3 };
        return { ...signed, data: { ...signed.data, covers: { ...covers, upTo } } };
      },
    });
    expect((await office.sync()).at(-1)).toMatchObject({ verdict: 'waiting', code: 'evidence-missing' });
    await declare();
    const refused = (await office.sync()).at(-1);
    expect(refused).toMatchObject({ verdict: 'refused', code: 'evidence-changed' });
    expect(refused?.reason).toMatch(
      /^It covers records 2 to 3 of Tablet \w\w, which was declared lost: they never came\./,
    );
    expect(await shop.app.db.selectFrom('pin_attempt').selectAll().execute()).toEqual([]);
  });
});

describe('a lost tablet that is found again', () => {
  it('is let in again only when the supervisor says so, and its late records are then taken', async () => {
    await raise('one');
    await lost.sync();
    await raise('made before it was missed');
    const late = [...lost.held(job.id).outbox];
    await declare();
    const sentAt = new Date(lost.now).toISOString();
    const body = { device: lost.device, sentAt, jobs: [], entries: late };
    expect(await ask(postSync, { tablet: lost.credential, body })).toMatchObject({
      status: 401,
      body: { error: { code: 'lost-tablet', message: expect.stringContaining('ask a supervisor') } },
    });
    expect((await change({ state: 'active' }, shop.people.ann)).status).toBe(403);
    expect(await change({ state: 'active' })).toMatchObject({ status: 200, body: { state: 'active' } });
    expect(await pushOf(late)).toMatchObject([{ verdict: 'recorded' }]);
    expect(await kinds()).toEqual(['opened', 'deviation-raised', 'tablet-lost', 'deviation-raised']);
    // That it was lost still has to be disposed of: nobody else has looked at what came late.
    expect((await state()).deviations).toMatchObject([{}, { rule: 'tablet-lost' }, {}]);
  });

  it('has its records taken with a conflict where others did the same meanwhile', async () => {
    await raise('one');
    await lost.sync();
    await lost.record(job.id, rags, { by: shop.people.ann });
    await declare();
    await office.sync();
    await office.record(job.id, rags, { by: shop.people.ben });
    await office.sync();
    await change({ state: 'active' });
    const [verdict] = await lost.sync();
    expect(verdict).toMatchObject({ verdict: 'recorded', code: 'already-done' });
    expect((await state()).deviations.at(-1)).toMatchObject({ rule: 'conflict', blocks: true });
  });
});
