import { beforeEach, describe, expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import {
  expectAllArrived,
  firstWork,
  idsFromTablets,
  killAndReopen,
  must,
  openTablet,
  recordAll,
  recordRemarks,
  remark,
  signIn,
  type TestTablet,
} from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import type { Offline } from './offline';
import { listJobs, makeAvailableOffline, pullJobList } from './prefetch';
import { forgetSignIn } from './tablet';

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

describe('sending', () => {
  it('brings everything in order, exactly once, and back into its place', async () => {
    server.isAway = true;
    const made = await work(30);
    expect(await offline.sync.now()).toMatchObject({ ok: false, code: 'no-network', offline: true });
    server.isAway = false;
    must(await offline.sync.now());
    await arrived(made);
  });

  it('repeats what it got no reply to, and is told that it is recorded already', async () => {
    const made = await work(12);
    server.lostReplies = 2;
    expect(await offline.sync.now()).toMatchObject({ ok: false });
    expect(idsFromTablets(server, job)).toHaveLength(12);
    expect((await offline.jobs.refresh(job)).pending.map(({ where }) => where)).toEqual(
      made.map(() => 'on this tablet'),
    );
    expect(await offline.sync.now()).toMatchObject({ ok: false });
    must(await offline.sync.now());
    await arrived(made);
  });

  it('goes on where it was when the tablet is killed between sending and hearing', async () => {
    server.isAway = true;
    const made = await work(8);
    server.isAway = false;
    server.lostReplies = 1;
    await offline.sync.now();
    offline = killAndReopen(tablet, offline);
    await offline.jobs.open(job);
    made.push(...(await remarks({ from: 1, count: 3 })));
    offline = killAndReopen(tablet, offline);
    must(await offline.sync.now());
    await arrived(made);
  });

  it('sends a great many in batches that the server takes', async () => {
    server.isAway = true;
    const made = await remarks({ from: 1, count: 450 });
    server.isAway = false;
    server.pageSize = 100;
    must(await offline.sync.now());
    const sizes = server.requests
      .filter(({ path }) => path === '/api/sync')
      .map(({ body }) => (body as { entries: unknown[] }).entries.length);
    expect(Math.max(...sizes)).toBe(200);
    await arrived(made);
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
    expect(idsFromTablets(server, job)).toHaveLength(180);
  }, 30_000);

  it('asks for no more jobs at once than the server answers', async () => {
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
    await arrived(made);
  });

  it('loses nothing when two tabs without locks send the same at once', async () => {
    const made = await work(10);
    const other = tablet.open();
    await Promise.all([offline.sync.now(), other.sync.now()]);
    must(await offline.sync.now());
    await arrived(made);
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
    made.push(...(await remarks({ from: 1, count: 5, by: 'mate' })));
    await forgetSignIn(offline, 'tech');
    made.push(...(await remarks({ from: 6, count: 5, by: 'mate' })));
    server.session = undefined;
    server.isAway = false;
    must(await offline.sync.now());
    await arrived(made);
    const authors = server
      .entriesOf(job)
      .slice(1)
      .map(({ by }) => by);
    expect(authors).toEqual([
      ...Array.from({ length: 15 }, () => 'tech'),
      ...Array.from({ length: 10 }, () => 'mate'),
    ]);
  });

  it('is refused under somebody else’s name, and keeps what was refused', async () => {
    const [made] = await remarks({ from: 1, count: 1 });
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
    const [next] = await remarks({ from: 1, count: 1 });
    expect(next!.deviceSeq).toBe(5);
    must(await offline.sync.now());
    expect(idsFromTablets(server, job)).toContain(next!.id);
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
    await arrived(made);
  });

  it('does not let a job that waits hold up another', async () => {
    const second = server.addJob(smallPlan());
    server.isAway = true;
    await remarks({ from: 1, count: 230 });
    server.isAway = false;
    server.judge = (entry) =>
      entry.job === job ? { verdict: 'waiting', code: 'gap', reason: 'Wait.' } : undefined;
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
    await arrived(made);
  });
});
