import { beforeEach, describe, expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import {
  expectAllArrived,
  firstWork,
  idsFromTablets,
  must,
  openTablet,
  photographed,
  picture,
  recordAll,
  recorded,
  recordRemarks,
  remark,
  type TestTablet,
} from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import type { Offline } from './offline';
import { recordEntries } from './record';
import { enrolAuthorKey, enrolTablet, readTablet } from './tablet';

let server: OfflineServer;
let job: string;
let tablet: TestTablet;
let offline: Offline;
beforeEach(async () => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
  ({ tablet, offline } = await openTablet(server, { job }));
});

const work = (count: number) => recordAll({ tablet, offline }, job, firstWork(count));
const remarks = (which: { from?: number; count: number; by?: string }) =>
  recordRemarks({ tablet, offline }, job, which);
const arrived = (made: { id: string }[]) => expectAllArrived({ server, offline }, job, made);

describe('what the server sends', () => {
  it('brings others’ work page by page and folds it under the outbox', async () => {
    const { tablet: second, offline: other } = await openTablet(server, { job, people: ['mate'] });
    await recordAll({ tablet: second, offline: other }, job, firstWork(25), 'mate');
    must(await other.sync.now());
    await remarks({ from: 1, count: 2 });
    server.pageSize = 4;
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.row.have?.seq).toBe(28);
    expect(view.state.tallies.rags).toEqual({ out: 12 });
    expect(view.state.deviations).toHaveLength(2);
  });

  it('moves the job to another plan, and brings that plan', async () => {
    const view = await offline.jobs.open(job);
    await work(3);
    const plan = smallPlan();
    const [first, ...rest] = plan.steps;
    const moved = { ...plan, steps: [{ ...first!, title: 'Look at the vehicle first' }, ...rest] };
    server.movePlan(job, moved);
    must(await offline.sync.now());
    const after = await offline.jobs.refresh(job);
    expect(after.row.plan).not.toBe(view.row.plan);
    expect(after.state.plan.steps[0]!.title).toBe('Look at the vehicle first');
    expect(after.state.count).toBe(5);
    const [made] = await remarks({ from: 1, count: 1 });
    expect(made!.plan).toBe(after.row.plan);
  });

  it('is not taken past a gap', async () => {
    const { tablet: second, offline: other } = await openTablet(server, { job, people: ['mate'] });
    await recordAll({ tablet: second, offline: other }, job, firstWork(6), 'mate');
    must(await other.sync.now());
    server.onAnswer = withRows((rows) => rows.filter((_row, index) => index !== 2));
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.row.have?.seq).toBe(3);
    expect(view.stopped?.code).toBe('chain-broken');
    expect(await recordEntries(offline, job, [remark('no')], { by: 'tech' })).toMatchObject({
      code: 'chain-broken',
    });
    server.onAnswer = (_path, answer) => answer;
    must(await offline.sync.now());
    const mended = await offline.jobs.refresh(job);
    expect(mended.row.have?.seq).toBe(7);
    expect(mended.stopped).toBeUndefined();
  });

  it('is not taken if one letter was changed on the way', async () => {
    await work(3);
    server.onAnswer = withRows((rows) =>
      rows.map((row, index) => (index === 1 ? { ...row, recorded: { ...row.recorded, by: 'mate' } } : row)),
    );
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.stopped?.code).toBe('chain-broken');
    expect(view.pending.length + (view.row.have?.seq ?? 0)).toBe(4);
  });

  it('of a newer version stops that job with words, and only for as long', async () => {
    const { tablet: second, offline: other } = await openTablet(server, { job, people: ['mate'] });
    await recordAll({ tablet: second, offline: other }, job, firstWork(2), 'mate');
    must(await other.sync.now());
    server.onAnswer = withRows((rows) =>
      rows.map((row) => ({ ...row, recorded: { ...row.recorded, v: 2 } })),
    );
    must(await offline.sync.now());
    expect((await offline.jobs.refresh(job)).stopped).toMatchObject({
      code: 'newer-entry',
      words: expect.stringContaining('Update this tablet'),
    });
    server.onAnswer = (_path, answer) => answer;
    must(await offline.sync.now());
    expect((await offline.jobs.refresh(job)).stopped).toBeUndefined();
  });

  it('is nothing at all where something else answers', async () => {
    const made = await work(3);
    server.onAnswer = () => ({ hello: 'please sign in to this hotel' });
    expect(await offline.sync.now()).toMatchObject({ ok: false, code: 'unreadable-answer' });
    server.onAnswer = (_path, answer) => answer;
    must(await offline.sync.now());
    await arrived(made);
  });
});

describe('a server restored from a backup', () => {
  it('gets back from the tablet what it lacks, unchanged, before what is new', async () => {
    const made = await work(10);
    must(await offline.sync.now());
    const backup = server.backup();
    made.push(...(await remarks({ from: 1, count: 5 })));
    must(await offline.sync.now());
    server.isAway = true;
    made.push(...(await remarks({ from: 6, count: 3 })));
    server.restore(backup);
    server.isAway = false;
    server.pageSize = 4;
    must(await offline.sync.now());
    await arrived(made);
    expect(await offline.db.setAside.count()).toBeGreaterThanOrEqual(5);
    expect((await offline.jobs.refresh(job)).state.deviations).toHaveLength(8);
  });

  it('is not sent another tablet’s signature without its PIN', async () => {
    const backup = server.backup();
    await work(2);
    must(await offline.sync.now());
    // As if the last of them were a signature made elsewhere: there is no sealed PIN of it here.
    const last = (await offline.db.entries.toArray()).at(-1)!;
    await offline.db.entries.put({
      ...last,
      recorded: { ...last.recorded, kind: 'signed' } as typeof last.recorded,
    });
    server.restore(backup);
    must(await offline.sync.now());
    expect(idsFromTablets(server, job)).not.toContain(last.id);
    expect((await offline.db.setAside.toArray()).map(({ row }) => row.id)).toContain(last.id);
  });

  it('hears which records were made on what it has lost', async () => {
    const backup = server.backup();
    await remarks({ from: 1, count: 1 });
    must(await offline.sync.now());
    server.isAway = true;
    await remarks({ from: 2, count: 1 });
    server.restore(backup);
    server.isAway = false;
    // Learns of the restore, and is cut off before it sends anything again.
    server.onAnswer = (path, answer) => (path === '/api/sync' ? cutOffAfter(answer) : answer);
    await offline.sync.now();
    server.isAway = false;
    server.onAnswer = (_path, answer) => answer;
    await remarks({ from: 3, count: 1 });
    must(await offline.sync.now());
    const sent = server.requests.findLast(({ path }) => path === '/api/sync')!.body as {
      entries: { entry: { deviceSeq: number }; restored?: true }[];
    };
    expect(sent.entries.map(({ entry, restored }) => [entry.deviceSeq, restored])).toEqual([
      [1, true],
      [2, true],
      [3, undefined],
    ]);
  });

  it('hears which new records were made on what others did and it has lost', async () => {
    const { tablet: second, offline: other } = await openTablet(server, { job, people: ['mate'] });
    const backup = server.backup();
    await recordRemarks({ tablet: second, offline: other }, job, { count: 1, by: 'mate' });
    must(await other.sync.now());
    must(await offline.sync.now());
    server.restore(backup);
    server.onAnswer = (path, answer) => (path === '/api/sync' ? cutOffAfter(answer) : answer);
    await offline.sync.now();
    server.isAway = false;
    server.onAnswer = (_path, answer) => answer;
    await remarks({ from: 2, count: 1 });
    must(await offline.sync.now());
    const sent = server.requests.findLast(({ path }) => path === '/api/sync')!.body as {
      entries: { entry: { by: string }; restored?: true }[];
    };
    expect(sent.entries.map(({ entry, restored }) => [entry.by, restored])).toEqual([
      ['mate', true],
      ['tech', true],
    ]);
  });

  it('hears again of what it refused, and then takes what waits behind it', async () => {
    const backup = server.backup();
    server.judge = () => ({ verdict: 'refused', code: 'overtaken', reason: 'Somebody was quicker.' });
    const [refused] = await remarks({ from: 1, count: 1 });
    must(await offline.sync.now());
    server.judge = () => undefined;
    const made = await remarks({ from: 2, count: 2 });
    must(await offline.sync.now());
    server.restore(backup);
    must(await offline.sync.now());
    expect(idsFromTablets(server, job)).toEqual(made.map(({ id }) => id));
    expect(Object.keys(server.jobs.get(job)!.refused)).toEqual([refused!.id]);
    expect(await offline.db.refused.toArray()).toMatchObject([{ id: refused!.id, code: 'overtaken' }]);
    expect(await offline.db.outbox.count()).toBe(0);
  });

  it('hears again of what it refused last, although the tablet is ahead in nothing', async () => {
    await remarks({ from: 1, count: 1 });
    must(await offline.sync.now());
    const backup = server.backup();
    server.judge = () => ({ verdict: 'refused', code: 'overtaken', reason: 'Somebody was quicker.' });
    server.lostReplies = 1;
    const [refused] = await remarks({ from: 2, count: 1 });
    expect(await offline.sync.now()).toMatchObject({ ok: false });
    // The tablet hears the verdict, and the answer brings no more than that.
    server.onAnswer = withRows(() => []);
    must(await offline.sync.now());
    server.onAnswer = (_path, answer) => answer;
    server.restore(backup);
    server.judge = () => undefined;
    must(await offline.sync.now());
    must(await offline.sync.now());
    expect(Object.keys(server.jobs.get(job)!.refused)).toEqual([refused!.id]);
    const made = await remarks({ from: 3, count: 1 });
    must(await offline.sync.now());
    expect(idsFromTablets(server, job)).toContain(made[0]!.id);
  });

  it('has the last word on what this tablet had as refused', async () => {
    server.judge = () => ({ verdict: 'refused', code: 'overtaken', reason: 'Somebody was quicker.' });
    const [made] = await remarks({ from: 1, count: 1 });
    const backup = server.backup();
    const [pushed] = await offline.db.outbox.toArray();
    must(await offline.sync.now());
    server.restore(backup);
    server.judge = () => undefined;
    const { entry, signature, key } = pushed!;
    await server.receive({ entry, signature, key });
    must(await offline.sync.now());
    expect(await offline.db.refused.count()).toBe(0);
    expect(await offline.db.entries.where('id').equals(made!.id).count()).toBe(1);
  });

  it('gets photographs back too', async () => {
    const photo = picture('arrival');
    const backup = server.backup();
    recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
    must(await offline.sync.now());
    expect([...server.photos.keys()]).toEqual([photo.hash]);
    server.restore(backup);
    must(await offline.sync.now());
    expect([...server.photos.keys()]).toEqual([photo.hash]);
  });
});

describe('photographs that a restore took back', () => {
  it('are sent again although their record was in the backup', async () => {
    const photo = picture('arrival');
    recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
    must(await offline.sync.now());
    const backup = server.backup();
    server.restore(backup);
    expect(server.photos.size).toBe(0);
    must(await offline.sync.now());
    expect([...server.photos.keys()]).toEqual([photo.hash]);
    const sent = () => server.requests.filter(({ path }) => path.startsWith('/api/photos')).length;
    const before = sent();
    must(await offline.sync.now());
    expect(sent()).toBe(before);
  });
});

describe('photographs', () => {
  it('go after the records, and wait for a network as they do', async () => {
    server.isAway = true;
    const photo = picture('arrival');
    recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
    await offline.sync.now();
    server.isAway = false;
    must(await offline.sync.now());
    expect(new TextDecoder().decode(server.photos.get(photo.hash))).toBe('arrival');
    const paths = server.requests.map(({ path }) => path);
    expect(paths.lastIndexOf('/api/sync')).toBeLessThan(paths.indexOf(`/api/photos/${photo.hash}`));
    expect(await offline.db.photos.get(photo.hash)).toMatchObject({ sent: 1 });
  });

  it('are kept with the reason when the server does not take one, and hold up no other', async () => {
    const bad = picture('bad');
    await offline.db.photos.put({
      hash: '0'.repeat(64),
      job,
      type: bad.type,
      keptAt: '2026-06-02T08:00:00.000Z',
      sent: 0,
    });
    await offline.db.photoBytes.put({ hash: '0'.repeat(64), bytes: bad.bytes });
    const photo = picture('arrival');
    recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
    expect(await offline.sync.now()).toMatchObject({
      ok: false,
      why: expect.stringContaining('another hash'),
    });
    expect(await offline.db.photos.get('0'.repeat(64))).toMatchObject({
      sent: 0,
      trouble: expect.any(String),
    });
    expect(server.photos.has(photo.hash)).toBe(true);
  });
});

describe('a tablet that the workshop no longer knows', () => {
  it('keeps everything, says so, and sends it once it is enrolled again', async () => {
    const made = await work(5);
    server.forgetTablets();
    expect(await offline.sync.now()).toMatchObject({
      code: 'enrol-again',
      why: expect.stringContaining('must be enrolled again'),
    });
    expect(await readTablet(offline)).toMatchObject({ enrolled: false, mustEnrolAgain: true });
    expect(await offline.db.outbox.count()).toBe(5);
    const { id: before } = await readTablet(offline);
    server.session = 'tech';
    must(await enrolTablet(offline, 'again'));
    must(await enrolAuthorKey(offline, 'tech'));
    const after = await readTablet(offline);
    expect(after).toMatchObject({ enrolled: true });
    expect(after.id).not.toBe(before);
    made.push(...(await remarks({ from: 1, count: 2 })));
    expect(made.at(-1)).toMatchObject({ device: after.id, deviceSeq: 2 });
    must(await offline.sync.now());
    await arrived(made);
  });
});

/** Lets this answer through, and no request after it. */
function cutOffAfter(answer: unknown): unknown {
  server.isAway = true;
  return answer;
}

/** Changes the rows of every trail that an answer carries. */
function withRows(change: (rows: { recorded: object }[]) => { recorded: object }[]) {
  return (path: string, answer: unknown): unknown => {
    if (path !== '/api/sync') return answer;
    const { jobs, ...rest } = answer as { jobs: { entries: { recorded: object }[] }[] };
    return { ...rest, jobs: jobs.map((one) => ({ ...one, entries: change(one.entries) })) };
  };
}
