import { beforeEach, describe, expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import {
  must,
  openTablet,
  photographed,
  picture,
  recorded,
  recordRemarks,
  type TestTablet,
} from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import type { Offline } from './offline';
import { recordEntries } from './record';

let server: OfflineServer;
let job: string;
let tablet: TestTablet;
let offline: Offline;
const photo = picture('arrival');

beforeEach(async () => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
  ({ tablet, offline } = await openTablet(server, { job }));
  await offline.db.jobs.update(job, { registration: 'TW71 ABC' });
  recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
  must(await offline.sync.now());
});

const registration = async () => (await offline.db.jobs.get(job))?.registration;
const pictures = async () => [await offline.db.photos.count(), await offline.db.photoBytes.count()];

describe('a tablet', () => {
  it('forgets what an erasure took, with the sync that brings it, and keeps its records', async () => {
    server.erase(job, { fields: ['registration'], photographs: [photo.hash] });
    must(await offline.sync.now());
    expect(await registration()).toBeUndefined();
    expect(await pictures()).toEqual([0, 0]);
    expect(await offline.db.entries.count()).toBe(3);
    must(await offline.sync.now());
    expect(server.photos.size).toBe(0);
  });

  it('keeps what an erasure does not name', async () => {
    server.erase(job, { fields: ['customerName'], photographs: [] });
    must(await offline.sync.now());
    expect(await registration()).toBe('TW71 ABC');
    expect(await pictures()).toEqual([1, 1]);
  });

  it('forgets who a job was for once it is gone, but never before everything was sent', async () => {
    server.isAway = true;
    await recordRemarks({ tablet, offline }, job, { count: 1 });
    server.isAway = false;
    const kept = server.jobs.get(job)!;
    server.judge = () => ({ verdict: 'waiting', code: 'gap', reason: 'Another number has not come yet.' });
    server.onAnswer = (path, answer) =>
      path === '/api/sync'
        ? { ...(answer as object), jobs: [{ id: job, entries: [], more: false, head: null, gone: true }] }
        : answer;
    must(await offline.sync.now());
    expect(await registration()).toBe('TW71 ABC');
    server.judge = () => undefined;
    must(await offline.sync.now());
    expect(kept.rows.length).toBe(3);
    await offline.db.outbox.clear();
    must(await offline.sync.now());
    expect(await registration()).toBeUndefined();
    expect(await pictures()).toEqual([0, 0]);
  });
});
