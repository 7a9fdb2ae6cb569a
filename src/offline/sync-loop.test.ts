import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import { openTablet, recorded, type TestTablet } from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import type { Offline } from './offline';
import { recordEntries, type Draft } from './record';
import { clockWords, whereIsRecord, type SyncStatus } from './sync-status';

let server: OfflineServer;
let job: string;
let tablet: TestTablet;
let offline: Offline;
beforeEach(async () => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
  ({ tablet, offline } = await openTablet(server, { job }));
});
afterEach(() => offline.sync.stop());

const rags: Draft = { kind: 'counted', step: 'strip.rags-out', data: { count: 12 } };
const syncs = () => server.requests.filter(({ path }) => path === '/api/sync').length;

/** Waits until a status comes that is as asked. */
function until(isSo: (status: SyncStatus) => boolean): Promise<SyncStatus> {
  return new Promise((resolve) => {
    const stop = offline.sync.subscribe((status) => {
      if (!isSo(status)) return;
      stop();
      resolve(status);
    });
  });
}

const ended = () => until(({ running, nextTryAt }) => !running && nextTryAt !== undefined);

describe('when a tablet syncs', () => {
  it('does so at the start, and then by a timer', async () => {
    const before = syncs();
    const first = ended();
    offline.sync.start();
    await first;
    expect(syncs()).toBe(before + 1);
    expect(tablet.timers.map(({ ms }) => ms)).toEqual([60_000]);
  });

  it('waits with the first run where it is asked to, and shows meanwhile what is here', async () => {
    const before = syncs();
    const here = until(({ onTablet }) => onTablet === 1);
    recorded(await recordEntries(offline, job, [rags], { by: 'tech' }));
    offline.sync.start(1000);
    await here;
    const [timer] = tablet.timers;
    expect([syncs(), timer!.ms]).toEqual([before, 1000]);
    const first = ended();
    timer!.then();
    await first;
    expect(syncs()).toBeGreaterThan(before);
  });

  it('takes it for a lost network where what sends can’t be loaded, and tries again', async () => {
    vi.doMock('./sync-run', () => {
      throw new TypeError('Failed to fetch dynamically imported module');
    });
    try {
      expect(await offline.sync.now()).toMatchObject({ ok: false, code: 'no-network' });
    } finally {
      vi.doUnmock('./sync-run');
    }
    expect(await offline.sync.now()).toEqual({ ok: true });
  });

  it('does so soon after a record, and tells where the record is', async () => {
    const begun = ended();
    offline.sync.start();
    await begun;
    const onTablet = until((status) => status.onTablet === 1);
    const [entry] = recorded(await recordEntries(offline, job, [rags], { by: 'tech' }));
    expect((await onTablet).words).toBe('1 on this tablet');
    expect(await whereIsRecord(offline, entry!.id)).toBe('on this tablet');
    const [timer] = tablet.timers;
    expect(timer!.ms).toBeLessThanOrEqual(500);
    const sent = until((status) => status.sent === 1 && status.onTablet === 0);
    timer!.then();
    expect((await sent).words).toBe('All sent');
    expect(await whereIsRecord(offline, entry!.id)).toBe('sent');
  });

  it('does so when the network comes back and when the page comes to the front', async () => {
    const begun = ended();
    offline.sync.start();
    await begun;
    const before = syncs();
    const online = until(({ running }) => !running);
    window.dispatchEvent(new Event('online'));
    await online;
    await offline.sync.now();
    document.dispatchEvent(new Event('visibilitychange'));
    await offline.sync.now();
    expect(syncs()).toBeGreaterThan(before + 1);
  });

  it('waits longer after each failure, up to some minutes, and forgets that with the first success', async () => {
    const begun = ended();
    offline.sync.start();
    await begun;
    server.isAway = true;
    const waits: number[] = [];
    for (let n = 0; n < 10; n += 1) {
      await offline.sync.now();
      waits.push(tablet.timers[0]!.ms);
    }
    expect(waits.slice(0, 4)).toEqual([2000, 4000, 8000, 16_000]);
    expect(waits.at(-1)).toBe(300_000);
    server.isAway = false;
    await offline.sync.now();
    expect(tablet.timers[0]!.ms).toBe(60_000);
  });

  it('stops when it is told to', async () => {
    const begun = ended();
    offline.sync.start();
    await begun;
    offline.sync.stop();
    const before = syncs();
    window.dispatchEvent(new Event('online'));
    await new Promise((resolve) => setTimeout(resolve, 20));
    expect([syncs(), tablet.timers]).toEqual([before, []]);
  });
});

describe('what it tells', () => {
  it('keeps the time of the last success and the trouble since', async () => {
    offline.sync.start();
    await offline.sync.now();
    const successAt = new Date(tablet.now).toISOString();
    tablet.now += 3_600_000;
    server.isAway = true;
    const told = until(({ trouble }) => trouble !== undefined);
    await offline.sync.now();
    expect(await told).toMatchObject({
      lastSyncAt: successAt,
      lastTriedAt: new Date(tablet.now).toISOString(),
      trouble: { code: 'no-network', words: expect.stringContaining('Nothing is lost') },
    });
  });

  it('tells of a clock that is more than five minutes off', async () => {
    server.onAnswer = (path, answer) =>
      path === '/api/sync' ? { ...(answer as object), clockOffsetMs: 360_000 } : answer;
    offline.sync.start();
    const told = until(({ clockOffsetMs }) => clockOffsetMs !== undefined);
    await offline.sync.now();
    expect(clockWords((await told).clockOffsetMs)).toContain('6 minutes fast');
    expect(clockWords(-300_000)).toBeUndefined();
    expect(clockWords(-301_000)).toContain('5 minutes slow');
  });

  it('counts what is refused and what waits', async () => {
    offline.sync.start();
    server.judge = () => ({ verdict: 'refused', code: 'order', reason: 'Not now.' });
    const told = until(({ refused }) => refused === 1);
    recorded(await recordEntries(offline, job, [rags], { by: 'tech' }));
    await offline.sync.now();
    expect((await told).words).toBe('1 refused');
  });
});
