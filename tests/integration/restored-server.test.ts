import { beforeEach, describe, expect, it, vi } from 'vitest';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { POST as postJobs } from '@/pages/api/jobs/index';
import type { Entry, Recorded } from '@/domain/entry';
import { contentOf, verifyTrail } from '@/domain/trail';
import { nodeChecks } from '@/server/trail-checks';
import { THE_WORKSHOP } from '@/server/actor';
import { getFold } from '@/server/job-fold';
import { setActive } from '@/server/people';
import { setWorkshop } from '@/server/workshop';
import { appendWorkshopEntry, findLastRestore } from '@/server/workshop-trail';
import type { ScriptedEntry } from '@db/scripted-work';
import { backUpTestApp, restoreTestApp } from '../support/database';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  prepareOpening,
  pushTo,
  type Shop,
  type TestTablet,
  trailOf,
  workshopOf,
} from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, ann, ben } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann, ben]);
  job = await openTestJob(tablet, supervisor);
});

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

const raise = (words: string) => tablet.record(job.id, remark(words), { by: shop.people.ann });

const workshopRows = () => shop.app.db.selectFrom('workshop_entry').selectAll().orderBy('seq').execute();

const verify = async () => {
  const exported = await ask(getExport, { as: shop.people.supervisor, params: { id: job.id } });
  return verifyTrail(exported.text, nodeChecks());
};

describe('the note of a restore', () => {
  const asksWith = (from: TestTablet, seq: number, hash: string) =>
    pushTo(from.credential, {
      device: from.device,
      sentAt: new Date(from.now).toISOString(),
      jobs: [{ id: job.id, have: { seq, hash: hash.repeat(64) } }],
      entries: [],
    });
  const kinds = async () => (await trailOf(shop.app, job.id)).map(({ kind }) => kind);

  it('is one for a tablet, whatever it says to hold', async () => {
    for (const hash of ['a', 'b', 'c', 'd']) {
      for (const seq of [1, 2, 3, 40]) await asksWith(tablet, seq, hash);
    }
    expect(await kinds()).toEqual(['opened', 'restored']);
  });

  it('is one for each tablet', async () => {
    const other = await enrolTestTablet(shop, [shop.people.ben]);
    for (const from of [tablet, other, tablet, other]) await asksWith(from, 40, 'a');
    expect(await kinds()).toEqual(['opened', 'restored', 'restored']);
  });

  it('comes again for another restore, after the tablet has come back into line', async () => {
    await asksWith(tablet, 40, 'a');
    await raise('one');
    await tablet.sync();
    await asksWith(tablet, 50, 'b');
    await asksWith(tablet, 51, 'c');
    expect(await kinds()).toEqual(['opened', 'restored', 'deviation-raised', 'restored']);
  });
});

describe('a refusal that a restore took back', () => {
  const refused = { reason: 'Somebody was quicker.' };

  it('is given again on the word of the tablet that signed the record, and uses its number up', async () => {
    await raise('one');
    await raise('two');
    const [one] = tablet.held(job.id).outbox;
    Object.assign(one!, { refused });
    expect(await tablet.sync()).toMatchObject([
      { verdict: 'refused', code: 'told-before', reason: expect.stringContaining('Somebody was quicker.') },
      { verdict: 'recorded' },
    ]);
    const again = [{ ...one!, refused: undefined }, one!];
    for (const entry of again) {
      const body = { device: tablet.device, sentAt: new Date(tablet.now).toISOString(), jobs: [] };
      const { verdicts } = await pushTo(tablet.credential, { ...body, entries: [entry] });
      expect(verdicts).toMatchObject([{ verdict: 'refused', code: 'told-before' }]);
    }
    const kinds = (await trailOf(shop.app, job.id)).map(({ kind }) => kind);
    expect(kinds).toEqual(['opened', 'refused', 'deviation-raised']);
    expect(await verify()).toMatchObject({ ok: true });
  });

  it('is no part of what its tablet saw afterwards', async () => {
    const { ann, supervisor } = shop.people;
    await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit, { entries: 1 });
    const [first] = tablet.held(job.id).outbox;
    Object.assign(first!, { refused });
    const { kind, step, data } = first!.entry;
    await tablet.record(job.id, { kind, step, data } as ScriptedEntry, { by: ann, force: true });
    const verdicts = await tablet.sync();
    expect(verdicts.map(({ verdict, code }) => [verdict, code])).toEqual([
      ['refused', 'told-before'],
      ['recorded', undefined],
    ]);
  });

  it('counts for nothing on a record that is in the trail, or whose signature is wrong', async () => {
    await raise('one');
    await tablet.sync();
    await raise('two');
    const [, row] = await trailOf(shop.app, job.id);
    const entry = contentOf(JSON.parse(row!.body) as Recorded) as Entry;
    const [two] = tablet.held(job.id).outbox;
    const signature = row!.signature!;
    const { verdicts } = await pushTo(tablet.credential, {
      device: tablet.device,
      sentAt: new Date(tablet.now).toISOString(),
      jobs: [],
      entries: [
        Object.assign({ entry, signature, key: row!.key_id! }, { refused }),
        Object.assign({ ...two!, signature }, { refused }),
      ],
    });
    expect(verdicts).toMatchObject([
      { verdict: 'already recorded' },
      { verdict: 'refused', code: 'signature-wrong' },
    ]);
  });
});

describe('an act on a view that a restore took back', () => {
  const restored = true as const;
  const unordered = { kind: 'done', step: 'strip.cap-off@rod1', data: {} } as const;
  const judged = async (kind: Partial<ScriptedEntry>, by = shop.people.ann) => {
    await tablet.record(job.id, kind as typeof unordered, { by, force: true });
    Object.assign(tablet.held(job.id).outbox.at(-1)!, { restored });
    const [verdict] = await tablet.sync();
    return verdict;
  };
  const meetRestore = () =>
    pushTo(tablet.credential, {
      device: tablet.device,
      sentAt: new Date(tablet.now).toISOString(),
      jobs: [{ id: job.id, have: { seq: 40, hash: 'a'.repeat(64) } }],
      entries: [],
    });

  it('is recorded with a conflict that blocks, whatever order it seems to be out of', async () => {
    await meetRestore();
    expect(await judged(unordered)).toMatchObject({ verdict: 'recorded', code: expect.any(String) });
    const { state } = await getFold(shop.app.db, job.id);
    expect(state.deviations).toMatchObject([{ blocks: true, step: unordered.step }]);
  });

  it('is recorded in the very push in which the tablet first learns of the restore', async () => {
    await tablet.record(job.id, unordered, { by: shop.people.ann, force: true });
    const { verdicts } = await pushTo(tablet.credential, {
      device: tablet.device,
      sentAt: new Date(tablet.now).toISOString(),
      jobs: [{ id: job.id, have: { seq: 40, hash: 'a'.repeat(64) } }],
      entries: tablet.held(job.id).outbox,
    });
    expect(verdicts).toMatchObject([{ verdict: 'recorded', code: expect.any(String) }]);
  });

  it('is recorded although a second restore took the note of the first away', async () => {
    const copy = await backUpTestApp(shop.app);
    shop.app = await restoreTestApp(shop.app, copy);
    await meetRestore();
    shop.app.clock.advance(1000);
    shop.app = await restoreTestApp(shop.app, copy);
    expect((await trailOf(shop.app, job.id)).map(({ kind }) => kind)).toEqual(['opened']);
    expect(await judged(unordered)).toMatchObject({ verdict: 'recorded', code: expect.any(String) });
  });

  it('is refused where no restore is told of', async () => {
    expect(await judged(unordered)).toMatchObject({ verdict: 'refused' });
  });

  it('is refused if its author could not have done it anyhow', async () => {
    await meetRestore();
    const { owner } = shop.people;
    const { ann } = shop.people;
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
    tablet.workshop = await workshopOf(shop.app);
    expect(await judged(unordered)).toMatchObject({ verdict: 'refused', code: 'inactive-person' });
  });

  it('is refused if its author was out before the numbers that the restore took back', async () => {
    const { owner, ann } = shop.people;
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
    tablet.workshop = await workshopOf(shop.app);
    shop.app = await restoreTestApp(shop.app, await backUpTestApp(shop.app));
    await meetRestore();
    expect(await judged(unordered)).toMatchObject({ verdict: 'refused', code: 'inactive-person' });
  });

  it('is refused if its tablet had the workshop as it is since the restore', async () => {
    const { owner, ann } = shop.people;
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
    shop.app = await restoreTestApp(shop.app, await backUpTestApp(shop.app));
    tablet.workshop = await workshopOf(shop.app);
    await meetRestore();
    await tablet.record(job.id, unordered, { by: ann, force: true });
    const workshopRestoredAt = await findLastRestore(shop.app.db);
    Object.assign(tablet.held(job.id).outbox.at(-1)!, { restored, workshopRestoredAt });
    expect(await tablet.sync()).toMatchObject([{ verdict: 'refused', code: 'inactive-person' }]);
  });

  it('is no excuse for a judgement', async () => {
    await meetRestore();
    const data = { deviation: job.id, disposition: 'accept as is', reason: 'It was so.' } as const;
    const verdict = await judged({ kind: 'deviation-disposed', data }, shop.people.supervisor);
    expect(verdict).toMatchObject({ verdict: 'refused' });
  });
});

describe('the time of the last restore', () => {
  it('is told to every tablet that syncs', async () => {
    const sync = () =>
      pushTo(tablet.credential, {
        device: tablet.device,
        sentAt: new Date(tablet.now).toISOString(),
        jobs: [],
        entries: [],
      });
    expect(await sync()).toMatchObject({ restoredAt: null });
    const { app } = shop;
    const data = { backupMadeAt: app.clock.now().toISOString(), breaks: 0 };
    await app.db
      .transaction()
      .execute((trx) => appendWorkshopEntry(trx, THE_WORKSHOP, { kind: 'restored', data }, app));
    expect(await sync()).toMatchObject({ restoredAt: app.clock.now().toISOString() });
  });
});

describe('a workshop entry that a restore took back', () => {
  it('is made up for where an entry names it, so that the export stays whole', async () => {
    const before = (await workshopRows()).length;
    tablet.workshop = { ...tablet.workshop, seq: before + 7 };
    await raise('one');
    await raise('two');
    expect(await tablet.sync()).toMatchObject([{ verdict: 'recorded' }, { verdict: 'recorded' }]);
    const rows = (await workshopRows()).slice(before);
    // The seven that were lost, and one more that makes the tablet fetch the workshop again.
    expect(rows.map(({ kind }) => kind)).toEqual(Array.from({ length: 8 }, () => 'restored'));
    expect(JSON.parse(rows[0]!.body)).toMatchObject({
      by: 'workshop',
      data: { after: before, upTo: before + 7, tablet: tablet.device },
    });
    expect(await verify()).toMatchObject({ ok: true, entries: 3 });
    await raise('three');
    await tablet.sync();
    expect((await workshopRows()).filter(({ kind }) => kind === 'restored')).toHaveLength(8);
  });

  it('is never a number that something new has taken', async () => {
    const before = (await workshopRows()).length;
    tablet.workshop = { ...tablet.workshop, seq: before + 3 };
    await raise('one');
    await tablet.sync();
    const { owner } = shop.people;
    await shop.app.db
      .transaction()
      .execute((trx) => setWorkshop(trx, owner, { name: 'Testwell', zone: 'UTC' }, shop.app));
    expect((await workshopRows()).at(-1)).toMatchObject({ kind: 'workshop-set', seq: before + 5 });
  });

  it('that can never have been there is refused, and nothing is made up', async () => {
    const before = (await workshopRows()).length;
    tablet.workshop = { ...tablet.workshop, seq: 1_000_000_000 };
    await raise('one');
    expect(await tablet.sync()).toMatchObject([{ verdict: 'refused', code: 'workshop-unknown' }]);
    expect(await workshopRows()).toHaveLength(before);
    expect(await verify()).toMatchObject({ ok: true });
  });

  it('is not made up for on the word of an entry whose signature is wrong', async () => {
    const before = (await workshopRows()).length;
    tablet.workshop = { ...tablet.workshop, seq: before + 7 };
    await raise('one');
    const [row] = tablet.held(job.id).outbox;
    row!.signature = `${row!.signature.slice(0, -4)}AAAA`;
    expect(await tablet.sync()).toMatchObject([{ verdict: 'refused', code: 'signature-wrong' }]);
    expect(await workshopRows()).toHaveLength(before);
  });

  it('is made up for when a job is opened that names it, and not for a number that was never there', async () => {
    const { supervisor } = shop.people;
    const open = async (seq: number) => {
      const { body } = await prepareOpening(tablet, supervisor, {
        change: (entry) => ({ ...entry, workshop: seq }),
      });
      return ask(postJobs, { as: supervisor, body });
    };
    const before = (await workshopRows()).length;
    expect(await open(before + 9000)).toMatchObject({
      status: 400,
      body: { error: { field: 'entry.workshop' } },
    });
    expect(await workshopRows()).toHaveLength(before);
    expect((await open(before + 4)).status).toBe(201);
    expect((await workshopRows()).slice(before).map(({ kind }) => kind)).toEqual([
      ...Array.from({ length: 5 }, () => 'restored'),
      'job-opened',
    ]);
  });
});
