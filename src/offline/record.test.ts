import { beforeEach, describe, expect, it } from 'vitest';
import { applyEntry } from '@/domain/job';
import { OfflineServer } from '../../tests/support/offline-server';
import {
  firstWork,
  killAndReopen,
  openTablet,
  photographed,
  picture,
  recordAll,
  recorded,
} from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import { contentHashOf } from './hashing';
import { recordEntries, type Draft } from './record';
import { forgetSignIn } from './tablet';

let server: OfflineServer;
let job: string;
beforeEach(() => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
});

const rags: Draft = { kind: 'counted', step: 'strip.rags-out', data: { count: 12 } };
const kit: Draft = { kind: 'fitted', step: 'strip.old-shell-kit', data: { count: 8, lot: 'S-1' } };

describe('recording', () => {
  it('has the record on the disk and in the view before it resolves', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    server.isAway = true;
    const [entry] = recorded(await recordEntries(offline, job, [rags], { by: 'tech' }));
    expect(offline.jobs.get(job)?.state.tallies.rags).toEqual({ out: 12 });
    const after = killAndReopen(tablet, offline);
    const view = await after.jobs.open(job);
    expect(view.pending.map(({ id, where }) => [id, where])).toEqual([[entry!.id, 'on this tablet']]);
    expect(view.state.tallies.rags).toEqual({ out: 12 });
  });

  it('writes the envelope that the server is to judge by', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    tablet.now = Date.parse('2026-06-02T09:30:00.125Z');
    const [entry] = recorded(
      await recordEntries(offline, job, [{ ...rags, with: ['mate'] }], { by: 'tech' }),
    );
    expect(entry).toMatchObject({
      v: 1,
      basis: 1,
      workshop: 9,
      by: 'tech',
      author: { name: 'T. Nician', roles: ['technician'] },
      with: ['mate'],
      deviceSeq: 1,
      at: '2026-06-02T09:30:00.125Z',
    });
    const [row] = await offline.db.outbox.toArray();
    expect(row?.contentHash).toBe(contentHashOf(entry!));
  });

  it('says in words what is out of order and writes nothing', async () => {
    const { offline } = await openTablet(server, { job });
    const sump: Draft = { kind: 'removed', step: 'strip.sump-off', data: {} };
    const outcome = await recordEntries(offline, job, [rags, sump], { by: 'tech' });
    expect(outcome).toMatchObject({ ok: false, code: 'order', index: 1 });
    expect(await offline.db.outbox.count()).toBe(0);
    expect(await offline.db.counters.get(job)).toBeUndefined();
  });

  it('takes several drafts of one touch together, in one unbroken row of numbers', async () => {
    const { offline } = await openTablet(server, { job });
    const entries = recorded(await recordEntries(offline, job, [rags, kit], { by: 'tech' }));
    expect(entries.map(({ deviceSeq }) => deviceSeq)).toEqual([1, 2]);
  });

  it('judges what two hands record at once one after the other', async () => {
    const { offline } = await openTablet(server, { job, people: ['tech', 'mate'] });
    const outcomes = await Promise.all([
      recordEntries(offline, job, [rags], { by: 'tech' }),
      recordEntries(offline, job, [kit], { by: 'mate' }),
      recordEntries(offline, job, [rags], { by: 'mate' }),
    ]);
    expect(outcomes.filter(({ ok }) => ok)).toHaveLength(2);
    expect(outcomes.find(({ ok }) => !ok)).toMatchObject({ code: 'already-done' });
    const rows = await offline.db.outbox.orderBy(':id').toArray();
    expect(rows.map(({ entry }) => entry.deviceSeq)).toEqual([1, 2]);
  });

  it('gives every record of many at once its own number, over two tabs', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    const other = tablet.open();
    await other.jobs.open(job);
    const deviation = (n: number): Draft => ({
      kind: 'deviation-raised',
      data: { class: 'C', words: `remark ${n}`, blocks: false },
    });
    const outcomes = await Promise.all(
      Array.from({ length: 12 }, (_, n) =>
        recordEntries(n % 2 === 0 ? offline : other, job, [deviation(n)], { by: 'tech' }),
      ),
    );
    outcomes.map(recorded);
    const rows = await offline.db.outbox.orderBy(':id').toArray();
    expect(rows.map(({ entry }) => entry.deviceSeq)).toEqual(Array.from({ length: 12 }, (_, n) => n + 1));
    const view = await offline.jobs.refresh(job);
    expect(view.state.deviations).toHaveLength(12);
  });

  it('brings text to the one form that may be hashed', async () => {
    const { offline } = await openTablet(server, { job });
    const note = 'a\u0308 \ud800!';
    const draft: Draft = {
      kind: 'deviation-raised',
      data: { class: 'C', words: note, blocks: false, rod: undefined },
    };
    const [entry] = recorded(await recordEntries(offline, job, [draft], { by: 'tech' }));
    expect(entry!.data).toEqual({ class: 'C', words: 'ä \ufffd!', blocks: false });
  });

  it('says which field cannot be written down', async () => {
    const { offline } = await openTablet(server, { job });
    const draft: Draft = { ...kit, data: { count: 8, lot: 'x'.repeat(61) } };
    const outcome = await recordEntries(offline, job, [draft], { by: 'tech' });
    expect(outcome).toMatchObject({ ok: false, code: 'malformed', why: expect.stringContaining('lot') });
  });
});

describe('who may record', () => {
  it('asks for a session, and only a sign-out or its end takes it', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    server.isAway = true;
    recorded(await recordEntries(offline, job, [rags], { by: 'tech' }));
    tablet.now += 13 * 3_600_000;
    expect(await recordEntries(offline, job, [kit], { by: 'tech' })).toMatchObject({ code: 'not-signed-in' });
    tablet.now -= 13 * 3_600_000;
    await forgetSignIn(offline, 'tech');
    expect(await recordEntries(offline, job, [kit], { by: 'tech' })).toMatchObject({ code: 'not-signed-in' });
    expect(await offline.db.outbox.count()).toBe(1);
  });

  it('lets nobody record whose key the workshop does not know', async () => {
    const { offline } = await openTablet(server, { job });
    await offline.db.signedIn.put({
      person: 'mate',
      name: 'M. Ate',
      roles: ['technician'],
      sessionUntil: '2027-01-01T00:00:00.000Z',
    });
    expect(await recordEntries(offline, job, [rags], { by: 'mate' })).toMatchObject({ code: 'no-key' });
  });

  it('keeps a private key that cannot be taken out', async () => {
    const { offline } = await openTablet(server, { job });
    const key = await offline.db.authorKeys.get('tech');
    await expect(offline.subtle.exportKey('pkcs8', key!.pair.privateKey)).rejects.toThrow();
  });
});

describe('photographs', () => {
  it('are kept with their record', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    const photo = picture('arrival');
    recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
    const after = killAndReopen(tablet, offline);
    const row = await after.db.photoBytes.get(photo.hash);
    expect(await after.db.photos.get(photo.hash)).toMatchObject({ job, sent: 0 });
    expect(new Uint8Array(row!.bytes)).toEqual(new Uint8Array(photo.bytes));
  });

  it('are not kept without a record, nor a record without its photograph', async () => {
    const { offline } = await openTablet(server, { job });
    const photo = picture('arrival');
    const apart = [
      await recordEntries(offline, job, [photographed(photo)], { by: 'tech' }),
      await recordEntries(offline, job, [rags], { by: 'tech', photos: [photo] }),
    ];
    expect(apart).toEqual([
      expect.objectContaining({ code: 'photo-apart' }),
      expect.objectContaining({ code: 'photo-apart' }),
    ]);
    expect(await offline.db.photos.count()).toBe(0);
    expect(await offline.db.outbox.count()).toBe(0);
  });

  it('leave nothing behind when the disk refuses them', async () => {
    const { offline } = await openTablet(server, { job });
    const photo = picture('arrival');
    const full = Object.assign(new Error('full'), { name: 'QuotaExceededError' });
    offline.db.photoBytes.hook('creating', () => {
      throw full;
    });
    await expect(
      recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }),
    ).rejects.toThrow('full');
    expect(await offline.db.outbox.count()).toBe(0);
    expect((await offline.jobs.refresh(job)).pending).toEqual([]);
  });
});

describe('the view', () => {
  it('is the same after a reload as it was grown touch by touch', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    await recordAll({ tablet, offline }, job, firstWork(30));
    const grown = offline.jobs.get(job)!;
    const after = killAndReopen(tablet, offline);
    const folded = await after.jobs.open(job);
    expect(folded.state).toEqual(grown.state);
    expect(grown.state).toEqual(grown.pending.map(({ entry }) => entry).reduce(applyEntry, grown.confirmed));
  });

  it('reaches another tab by itself', async () => {
    const { tablet, offline } = await openTablet(server, { job });
    const other = tablet.open();
    await other.jobs.open(job);
    const seen = new Promise((resolve) => {
      other.jobs.subscribe(job, (view) => resolve(view.state.tallies));
    });
    recorded(await recordEntries(offline, job, [rags], { by: 'tech' }));
    expect(await seen).toEqual({ rags: { out: 12 } });
  });

  it('tells that a job is not here', async () => {
    const { offline } = await openTablet(server);
    await expect(offline.jobs.open(job)).rejects.toThrow('not on this tablet');
  });
});
