/* A tablet goes on from what it did; that the server had something against it, it may not have heard yet. */
import { beforeEach, expect, it, vi } from 'vitest';
import { setActive } from '@/server/people';
import { forgetStoredFolds } from '@/server/job-fold';
import { closeApp, openApp, provideApp } from '@/server/compose';
import {
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  pushTo,
  setClocks,
  type Shop,
  type TestTablet,
} from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;
let tablet: TestTablet;
let other: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, ann, ben, owner } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann, ben]);
  other = await enrolTestTablet(shop, [ben]);
  job = await openTestJob(tablet, supervisor);
  await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
  const people = { technician: ann, supervisor };
  await tablet.perform(job.id, people, shop.kit, { entries: 3 });
  setClocks(tablet);
});

/** The server takes what is in the outbox, and its reply is lost. */
async function pushUnheard(): Promise<void> {
  const { verdicts } = await pushTo(tablet.credential, {
    device: tablet.device,
    sentAt: new Date(tablet.now).toISOString(),
    jobs: [],
    entries: tablet.held(job.id).outbox,
  });
  expect(verdicts.map(({ verdict, code }) => [verdict, code])).toEqual(
    Array.from({ length: 3 }, () => ['recorded', 'inactive-person']),
  );
}

async function goOn() {
  const { ben } = shop.people;
  await tablet.record(job.id, { kind: 'done', step: 'strip.raise', data: {} }, { by: ben });
  await tablet.record(job.id, { kind: 'placed', step: 'strip.strap', data: {} }, { by: ben });
  return (await tablet.sync()).slice(-2);
}

const TAKEN = [{ verdict: 'recorded', code: 'deviation-open' }, { verdict: 'recorded' }];

it('has what follows recorded, since it was in order on the tablet', async () => {
  await pushUnheard();
  expect(await goOn()).toMatchObject(TAKEN);
});

it('has what follows recorded in the same push', async () => {
  expect(await goOn()).toMatchObject(TAKEN);
});

it('has what follows recorded where another tablet was at it too', async () => {
  await pushUnheard();
  other.takeUp(job.id, job.plan);
  await other.sync();
  const remark = {
    kind: 'deviation-raised',
    data: { class: 'C', words: 'a scratch', blocks: false },
  } as const;
  await other.record(job.id, remark, { by: shop.people.ben });
  await other.sync();
  expect(await goOn()).toMatchObject(TAKEN);
});

it('has what follows recorded by a server that was started anew meanwhile', async () => {
  await pushUnheard();
  const { settings, clock, ids, log } = shop.app;
  await forgetStoredFolds(shop.app.db);
  const again = await openApp(settings, { clock, ids, log });
  provideApp(again);
  try {
    expect(await goOn()).toMatchObject(TAKEN);
  } finally {
    await closeApp(again);
  }
});
