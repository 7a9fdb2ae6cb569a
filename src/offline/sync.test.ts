import { beforeEach, describe, expect, it } from 'vitest';
import { applyEntry, emptyJob } from '@/domain/job';
import { OfflineServer } from '../../tests/support/offline-server';
import {
  firstWork,
  killAndReopen,
  must,
  openTablet,
  photographed,
  picture,
  recordAll,
  recorded,
  signIn,
  type TestTablet,
} from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import type { Offline } from './offline';
import { recordEntries, type Draft } from './record';
import { enrolTablet, enrolAuthorKey, forgetSignIn, readTablet } from './tablet';

let server: OfflineServer;
let job: string;
let tablet: TestTablet;
let offline: Offline;
beforeEach(async () => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
  ({ tablet, offline } = await openTablet(server, { job }));
});

const remark = (words: string): Draft => ({
  kind: 'deviation-raised',
  data: { class: 'C', words, blocks: false },
});
const work = (count: number, by = 'tech') => recordAll({ tablet, offline }, job, firstWork(count), by);
const remarks = (from: number, count: number, by = 'tech') =>
  recordAll(
    { tablet, offline },
    job,
    Array.from({ length: count }, (_, n) => remark(`no. ${from + n}`)),
    by,
  );
const idsOnServer = () => server.entriesOf(job).map(({ id }) => id);
const byTablet = () => server.entriesOf(job).filter(({ device }) => device !== 'office');

/** What must hold after any run: one unbroken chain here, the same as the server's, and nothing left over. */
async function expectAllArrived(made: { id: string }[]): Promise<void> {
  expect(byTablet().map(({ id }) => id)).toEqual(made.map(({ id }) => id));
  const rows = await offline.db.entries.orderBy(':id').toArray();
  expect(rows.map(({ hash }) => hash)).toEqual(server.jobs.get(job)!.rows.map(({ hash }) => hash));
  expect(await offline.db.outbox.count()).toBe(0);
  const view = await offline.jobs.refresh(job);
  expect(view.row.have).toEqual({ seq: rows.length, hash: rows.at(-1)!.hash });
  expect(view.state).toEqual(rows.map(({ recorded }) => recorded).reduce(applyEntry, emptyJob(smallPlan())));
}

describe('sending', () => {
  it('brings everything in order, exactly once, and back into its place', async () => {
    server.isAway = true;
    const made = await work(30);
    expect(await offline.sync.now()).toMatchObject({ ok: false, code: 'no-network', offline: true });
    server.isAway = false;
    must(await offline.sync.now());
    await expectAllArrived(made);
  });

  it('repeats what it got no reply to, and is told that it is recorded already', async () => {
    const made = await work(12);
    server.lostReplies = 2;
    expect(await offline.sync.now()).toMatchObject({ ok: false });
    expect(byTablet()).toHaveLength(12);
    expect((await offline.jobs.refresh(job)).pending.map(({ where }) => where)).toEqual(
      made.map(() => 'on this tablet'),
    );
    expect(await offline.sync.now()).toMatchObject({ ok: false });
    must(await offline.sync.now());
    await expectAllArrived(made);
  });

  it('goes on where it was when the tablet is killed between sending and hearing', async () => {
    server.isAway = true;
    const made = await work(8);
    server.isAway = false;
    server.lostReplies = 1;
    await offline.sync.now();
    offline = killAndReopen(tablet, offline);
    await offline.jobs.open(job);
    made.push(...(await remarks(1, 3)));
    offline = killAndReopen(tablet, offline);
    must(await offline.sync.now());
    await expectAllArrived(made);
  });

  it('sends a great many in batches that the server takes', async () => {
    server.isAway = true;
    const made = await remarks(1, 450);
    server.isAway = false;
    server.pageSize = 100;
    must(await offline.sync.now());
    const sizes = server.requests
      .filter(({ path }) => path === '/api/sync')
      .map(({ body }) => (body as { entries: unknown[] }).entries.length);
    expect(Math.max(...sizes)).toBe(200);
    await expectAllArrived(made);
  }, 30_000);

  it('keeps a batch under the size that the server reads', async () => {
    server.isAway = true;
    const long = Array.from({ length: 180 }, (_, n) => remark(`${n} ${'long words '.repeat(170)}`));
    await recordAll({ tablet, offline }, job, long);
    server.isAway = false;
    must(await offline.sync.now());
    const sizes = server.requests
      .filter(({ path }) => path === '/api/sync')
      .map(({ body }) => JSON.stringify(body).length);
    expect(Math.max(...sizes)).toBeLessThan(512 * 1024);
    expect(byTablet()).toHaveLength(180);
  }, 30_000);

  it('asks for no more jobs at once than the server answers', async () => {
    const { listJobs, makeAvailableOffline, pullJobList } = await import('./prefetch');
    for (let n = 0; n < 120; n += 1) server.addJob(smallPlan());
    must(await pullJobList(offline));
    await offline.db.jobs.toCollection().modify({ availableOffline: true });
    must(await makeAvailableOffline(offline, job));
    const asked = server.requests
      .filter(({ path }) => path === '/api/sync')
      .map(({ body }) => (body as { jobs: unknown[] }).jobs.length);
    expect(Math.max(...asked)).toBe(100);
    expect((await listJobs(offline)).every(({ have }) => have?.seq === 1)).toBe(true);
  }, 30_000);

  it('lets one run at a time do the work of all who ask', async () => {
    const made = await work(5);
    const before = server.requests.length;
    await Promise.all([offline.sync.now(), offline.sync.now(), offline.sync.now()]);
    expect(server.requests.slice(before).filter(({ path }) => path === '/api/sync')).toHaveLength(1);
    await expectAllArrived(made);
  });

  it('loses nothing when two tabs without locks send the same at once', async () => {
    const made = await work(10);
    const other = tablet.open();
    await Promise.all([offline.sync.now(), other.sync.now()]);
    must(await offline.sync.now());
    await expectAllArrived(made);
  });

  it('takes turns over all tabs where the browser has locks', async () => {
    const asked: string[] = [];
    const request = (name: string, run: () => Promise<unknown>) => {
      asked.push(name);
      return run();
    };
    const locks = { request } as unknown as LockManager;
    offline = tablet.open({ locks });
    must(await offline.sync.now());
    expect(asked).toEqual(['witnessmark-sync']);
  });
});

describe('whose entries they are', () => {
  it('delivers two people’s work after one of them has signed out and gone home', async () => {
    await signIn(offline, server, 'mate');
    server.isAway = true;
    const made = await work(15);
    made.push(...(await remarks(1, 5, 'mate')));
    await forgetSignIn(offline, 'tech');
    made.push(...(await remarks(6, 5, 'mate')));
    server.session = undefined;
    server.isAway = false;
    must(await offline.sync.now());
    await expectAllArrived(made);
    const authors = byTablet().map(({ by }) => by);
    expect(authors).toEqual([
      ...Array.from({ length: 15 }, () => 'tech'),
      ...Array.from({ length: 10 }, () => 'mate'),
    ]);
  });

  it('is refused under somebody else’s name, and keeps what was refused', async () => {
    const [made] = await remarks(1, 1);
    await offline.db.outbox
      .toCollection()
      .modify((row) => void (row.entry = { ...row.entry, by: 'mate' } as typeof row.entry));
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.refused).toMatchObject([{ id: made!.id, code: 'not-the-author' }]);
  });
});

describe('verdicts', () => {
  it('sets a refused record aside whole, with the reason, and goes on with the next number', async () => {
    server.judge = (entry) =>
      entry.kind === 'counted' ? { verdict: 'refused', code: 'order', reason: 'Not now.' } : undefined;
    const made = await work(4);
    const refused = made.filter(({ kind }) => kind === 'counted');
    expect(refused).toHaveLength(1);
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.refused).toMatchObject([{ entry: refused[0], code: 'order', reason: 'Not now.' }]);
    expect(view.pending).toEqual([]);
    expect(view.state.tallies).toEqual({});
    const [next] = await remarks(1, 1);
    expect(next!.deviceSeq).toBe(5);
    must(await offline.sync.now());
    expect(idsOnServer()).toContain(next!.id);
  });

  it('keeps what waits, says why, and sends it again until it is taken', async () => {
    let isLocked = true;
    server.judge = (entry) =>
      isLocked && entry.kind === 'counted'
        ? { verdict: 'waiting', code: 'pin-locked', reason: 'Too many wrong PINs.' }
        : undefined;
    const made = await work(4);
    must(await offline.sync.now());
    const waiting = await offline.jobs.refresh(job);
    expect(waiting.pending[0]).toMatchObject({ where: 'waiting', reason: 'Too many wrong PINs.' });
    expect(waiting.state.tallies.rags).toBeDefined();
    isLocked = false;
    must(await offline.sync.now());
    must(await offline.sync.now());
    await expectAllArrived(made);
  });

  it('does not let a job that waits hold up another', async () => {
    const second = server.addJob(smallPlan());
    server.isAway = true;
    await remarks(1, 230);
    server.isAway = false;
    server.judge = (entry) =>
      entry.job === job ? { verdict: 'waiting', code: 'gap', reason: 'Wait.' } : undefined;
    const { makeAvailableOffline } = await import('./prefetch');
    must(await makeAvailableOffline(offline, second));
    const made = await recordAll({ tablet, offline }, second, [remark('here')]);
    must(await offline.sync.now());
    expect(server.entriesOf(second).map(({ id }) => id)).toContain(made[0]!.id);
  }, 30_000);

  it('sends again what was told as recorded but is not in the trail', async () => {
    const backup = server.backup();
    const made = await work(3);
    server.lostReplies = 0;
    server.onAnswer = (path, answer) => (path === '/api/sync' ? { ...(answer as object), jobs: [] } : answer);
    must(await offline.sync.now());
    expect((await offline.jobs.refresh(job)).pending.map(({ where }) => where)).toEqual([
      'sent',
      'sent',
      'sent',
    ]);
    server.onAnswer = (_path, answer) => answer;
    server.restore(backup);
    must(await offline.sync.now());
    must(await offline.sync.now());
    await expectAllArrived(made);
  });
});

describe('what the server sends', () => {
  it('brings others’ work page by page and folds it under the outbox', async () => {
    const { tablet: second, offline: other } = await openTablet(server, { job, people: ['mate'] });
    await recordAll({ tablet: second, offline: other }, job, firstWork(25), 'mate');
    must(await other.sync.now());
    await remarks(1, 2);
    server.pageSize = 4;
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.row.have?.seq).toBe(28);
    expect(view.state.tallies.rags).toEqual({ out: 12 });
    expect(view.state.deviations).toHaveLength(2);
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
    await expectAllArrived(made);
  });
});

describe('a server restored from a backup', () => {
  it('gets back from the tablet what it lacks, unchanged, before what is new', async () => {
    const made = await work(10);
    must(await offline.sync.now());
    const backup = server.backup();
    made.push(...(await remarks(1, 5)));
    must(await offline.sync.now());
    server.isAway = true;
    made.push(...(await remarks(6, 3)));
    server.restore(backup);
    server.isAway = false;
    server.pageSize = 4;
    must(await offline.sync.now());
    await expectAllArrived(made);
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
    expect(byTablet().map(({ id }) => id)).not.toContain(last.id);
    expect((await offline.db.setAside.toArray()).map(({ row }) => row.id)).toContain(last.id);
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
    made.push(...(await remarks(1, 2)));
    expect(made.at(-1)).toMatchObject({ device: after.id, deviceSeq: 2 });
    must(await offline.sync.now());
    await expectAllArrived(made);
  });
});

/** Changes the rows of every trail that an answer carries. */
function withRows(change: (rows: { recorded: object }[]) => { recorded: object }[]) {
  return (path: string, answer: unknown): unknown => {
    if (path !== '/api/sync') return answer;
    const { jobs, ...rest } = answer as { jobs: { entries: { recorded: object }[] }[] };
    return { ...rest, jobs: jobs.map((one) => ({ ...one, entries: change(one.entries) })) };
  };
}
