import { beforeEach, describe, expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import { killAndReopen, must, openTablet, recordAll } from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import { signOpening } from './opening';
import { keepOpenJobsOffline, listJobs, makeAvailableOffline, pullJobList, pullWorkshop } from './prefetch';

let server: OfflineServer;
beforeEach(() => {
  server = new OfflineServer();
});

describe('the list of jobs', () => {
  it('shows what is open, and what is not yet here', async () => {
    const job = server.addJob(smallPlan());
    const { offline } = await openTablet(server);
    must(await pullJobList(offline));
    expect(await listJobs(offline)).toMatchObject([
      { id: job, number: '0147', availableOffline: false, have: null, head: { seq: 1 } },
    ]);
    await expect(offline.jobs.open(job)).rejects.toThrow('plan of this job is not on this tablet');
  });

  it('drops a job that is no longer open only if nothing of it is here', async () => {
    const [kept, dropped] = [server.addJob(smallPlan()), server.addJob(smallPlan())];
    const { offline } = await openTablet(server, { job: kept });
    must(await pullJobList(offline));
    server.jobs.clear();
    must(await pullJobList(offline));
    expect((await listJobs(offline)).map(({ id }) => id)).toEqual([kept]);
    expect(dropped).not.toBe(kept);
  });

  it('leaves what is here of a job alone when it is read again', async () => {
    const job = server.addJob(smallPlan());
    const { offline } = await openTablet(server, { job });
    const before = await offline.db.jobs.get(job);
    must(await pullJobList(offline));
    expect(await offline.db.jobs.get(job)).toEqual(before);
  });
});

describe('making a job available offline', () => {
  it('brings its plan and its trail, so that it opens with no network', async () => {
    const job = server.addJob(smallPlan());
    const { tablet, offline } = await openTablet(server);
    must(await makeAvailableOffline(offline, job));
    server.isAway = true;
    const after = killAndReopen(tablet, offline);
    const view = await after.jobs.open(job);
    expect(view.state).toMatchObject({ phase: 'running', number: '0147', seq: 1 });
  });

  it('does not take a plan that is not the one asked for', async () => {
    const job = server.addJob(smallPlan());
    const { offline } = await openTablet(server);
    server.onAnswer = (path, answer) =>
      path.startsWith('/api/plans') ? { ...(answer as object), stops: [] } : answer;
    expect(await makeAvailableOffline(offline, job)).toMatchObject({ ok: false, code: 'wrong-plan' });
    expect(await offline.db.plans.count()).toBe(0);
  });

  it('says so when the job is not on the workshop’s list', async () => {
    const { offline } = await openTablet(server);
    expect(await makeAvailableOffline(offline, 'no-such-job')).toMatchObject({ code: 'not-listed' });
  });

  it('does it for a person’s open jobs and no others', async () => {
    const own = server.addJob(smallPlan(), ['tech']);
    server.addJob(smallPlan(), ['mate']);
    const { offline } = await openTablet(server);
    must(await keepOpenJobsOffline(offline, 'tech'));
    const available = (await listJobs(offline)).filter(({ availableOffline }) => availableOffline);
    expect(available.map(({ id }) => id)).toEqual([own]);
  });
});

describe('the workshop', () => {
  it('is brought again by a sync when it has moved on, and then judged by', async () => {
    const job = server.addJob(smallPlan());
    const { tablet, offline } = await openTablet(server, { job });
    server.workshop = { ...server.workshop, seq: 12 };
    must(await offline.sync.now());
    expect(await offline.db.workshop.get('workshop')).toMatchObject({ seq: 12 });
    const drafts = [{ kind: 'took-over', data: { firstOfShift: false } } as const];
    const [entry] = await recordAll({ tablet, offline }, job, drafts);
    expect(entry!.workshop).toBe(12);
    must(await pullWorkshop(offline));
  });
});

describe('opening a job at a desk', () => {
  it('signs its first entry, and goes on counting from it', async () => {
    const { tablet, offline } = await openTablet(server, { people: ['sup'] });
    const made = await signOpening(offline, {
      plan: 'a'.repeat(64),
      by: 'sup',
      data: {
        number: '0200',
        engine: 'Testwell T4',
        options: {},
        odometer: { value: '120300', unit: 'km' },
        commitments: {},
        oldParts: 'scrap',
      },
    });
    if (!made.ok) throw new Error(made.why);
    expect(made.entry).toMatchObject({ kind: 'opened', by: 'sup', deviceSeq: 1, basis: 0 });
    const after = killAndReopen(tablet, offline);
    expect(await after.db.counters.get(made.entry.job)).toMatchObject({ deviceSeq: 1 });
  });
});
