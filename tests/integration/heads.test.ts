import { beforeEach, describe, expect, it, vi } from 'vitest';
import { DAY, HOUR } from '@/server/clock';
import type { App } from '@/server/compose';
import { keepHeadsSigned, signDailyHeads } from '@/server/daily-heads';
import { signDueHeads } from '@/server/due-heads';
import type { ScriptedEntry } from '@db/scripted-work';
import type * as Keys from '@/server/keys';
import {
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const key = vi.hoisted(() => ({ fails: false }));

/** A key that cannot sign, as a full disk or a broken key file could make it. */
vi.mock('@/server/keys', async (original) => {
  const real = await original<typeof Keys>();
  return {
    ...real,
    signWithHeadKey: (...parts: Parameters<typeof real.signWithHeadKey>) => {
      if (key.fails) throw new Error('the key cannot sign');
      return real.signWithHeadKey(...parts);
    },
  };
});

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  key.fails = false;
  shop = await openShop();
  const { supervisor, ann } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann]);
  job = await openTestJob(tablet, supervisor);
});

const headsOf = (trail: string) =>
  shop.app.db.selectFrom('signed_head').selectAll().where('trail', '=', trail).orderBy('seq').execute();

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

/** Works up to the first hold point of class A and signs it. */
async function signFirstHoldPoint(): Promise<void> {
  const { supervisor, ann } = shop.people;
  await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit, { step: 'build.caps-marked' });
  await tablet.sign(job.id, 'build.caps-marked', { by: supervisor });
  setClocks(tablet);
}

describe('a head that could not be signed', () => {
  it('costs no entry of the push, and is signed at the job’s next push', async () => {
    await signFirstHoldPoint();
    key.fails = true;
    const verdicts = await tablet.sync();
    expect(verdicts.filter(({ verdict }) => verdict !== 'recorded')).toEqual([]);
    const signed = (await trailOf(shop.app, job.id)).at(-1);
    expect(signed).toMatchObject({ kind: 'signed' });
    expect(await headsOf(job.id)).toEqual([]);
    key.fails = false;
    await tablet.record(job.id, remark('one'), { by: shop.people.ann });
    await tablet.sync();
    expect(await headsOf(job.id)).toMatchObject([{ seq: signed!.seq, hash: signed!.hash }]);
  });

  it('is signed at the next start', async () => {
    await signFirstHoldPoint();
    key.fails = true;
    await tablet.sync();
    key.fails = false;
    await keepHeadsSigned(shop.app)();
    expect((await headsOf(job.id)).map(({ seq }) => seq)).toContain((await trailOf(shop.app, job.id)).length);
    const told = await shop.app.db
      .selectFrom('workshop_entry')
      .select(['by_person', 'body'])
      .where('kind', '=', 'head-signed')
      .execute();
    expect(told).toMatchObject([{ by_person: shop.people.supervisor.id }]);
  });

  it('is due no more once a later head covers it', async () => {
    await signFirstHoldPoint();
    key.fails = true;
    await tablet.sync();
    await tablet.record(job.id, remark('one'), { by: shop.people.ann });
    await tablet.sync();
    key.fails = false;
    await signDailyHeads(shop.app);
    const heads = await headsOf(job.id);
    await signDueHeads(shop.app);
    expect(await headsOf(job.id)).toEqual(heads);
    expect(heads).toHaveLength(1);
  });
});

describe('the heads of a day', () => {
  it('are one for each trail that grew, once a day, by the server itself', async () => {
    const second = await openTestJob(tablet, shop.people.supervisor);
    expect(await signDailyHeads(shop.app)).toBe(3);
    const [head] = await headsOf(job.id);
    expect(head).toMatchObject({ seq: 1, hash: (await trailOf(shop.app, job.id))[0]!.hash });
    expect(await headsOf(second.id)).toHaveLength(1);
    const newest = await shop.app.db
      .selectFrom('workshop_entry')
      .selectAll()
      .orderBy('seq', 'desc')
      .limit(1)
      .executeTakeFirstOrThrow();
    // The workshop's trail tells of the heads of the jobs, and its own head covers that.
    expect(newest).toMatchObject({ kind: 'head-signed', by_person: null });
    expect(JSON.parse(newest.body)).toMatchObject({
      by: 'workshop',
      author: { name: 'Workshop', roles: [] },
    });
    expect(await headsOf('workshop')).toMatchObject([{ seq: newest.seq, hash: newest.hash }]);

    await tablet.record(job.id, remark('one'), { by: shop.people.ann });
    await tablet.sync();
    shop.app.clock.advance(2 * HOUR);
    expect(await signDailyHeads(shop.app), 'the same day').toBe(0);
    shop.app.clock.advance(DAY);
    expect(await signDailyHeads(shop.app), 'one job grew, and so did the workshop’s').toBe(2);
    expect((await headsOf(job.id)).map(({ seq }) => seq)).toEqual([1, 2]);
    expect(await headsOf(second.id)).toHaveLength(1);
    shop.app.clock.advance(DAY);
    expect(await signDailyHeads(shop.app), 'nothing grew').toBe(0);
  });

  it('begin with the day of the workshop’s zone', async () => {
    // 07:00 UTC; in Lisbon it is an hour later, so that its day begins at 23:00.
    await signDailyHeads(shop.app);
    await tablet.record(job.id, remark('one'), { by: shop.people.ann });
    await tablet.sync();
    shop.app.clock.advance(15 * HOUR + 59 * 60_000);
    expect(await signDailyHeads(shop.app)).toBe(0);
    shop.app.clock.advance(60_000);
    expect(await signDailyHeads(shop.app)).toBe(2);
  });

  it('that could not be signed are tried again the same day', async () => {
    key.fails = true;
    expect(await signDailyHeads(shop.app)).toBe(0);
    key.fails = false;
    expect(await signDailyHeads(shop.app)).toBe(2);
  });

  it('are made by the running server, at its start and by its timer, until it stops', async () => {
    vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval'] });
    try {
      const stop = keepHeadsSigned(shop.app);
      const at = () => headsOf('workshop').then((heads) => heads.length);
      await vi.waitFor(async () => expect(await at()).toBe(1));
      await grow(shop.app);
      shop.app.clock.advance(DAY);
      vi.advanceTimersByTime(HOUR);
      await vi.waitFor(async () => expect(await at()).toBe(2));
      await stop();
      await grow(shop.app);
      shop.app.clock.advance(DAY);
      vi.advanceTimersByTime(HOUR);
      await stop();
      expect(await at()).toBe(2);
    } finally {
      vi.useRealTimers();
    }
  });
});

async function grow(app: App): Promise<void> {
  const { setWorkshop } = await import('@/server/workshop');
  const { owner } = shop.people;
  await app.db
    .transaction()
    .execute((trx) => setWorkshop(trx, owner, { name: 'Testwell Yard', zone: 'Europe/Lisbon' }, app));
}
