import { Dexie } from 'dexie';
import { describe, expect, it } from 'vitest';
import { applyEntry, emptyJob } from '@/domain/job';
import { OfflineServer } from '../../tests/support/offline-server';
import { firstWork, must, openTablet, recordAll } from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import { openFloorDatabase } from './database';
import { keepPlace, noteActivity, readPlace, wasAway } from './places';

/** The stores as each released version had them; a released line is never changed. */
const RELEASED: Record<string, string>[] = [
  {
    meta: 'key',
    authorKeys: 'person',
    signedIn: 'person',
    workshop: 'key',
    jobs: 'id',
    plans: 'hash',
    entries: '[job+seq], id, device',
    outbox: '[job+place], id, where',
    refused: 'id, job',
    setAside: 'hash, job',
    counters: 'job',
    photos: 'hash, job, sent',
    photoBytes: 'hash',
    places: 'job',
  },
];

describe('an outbox outlives the version that wrote it', () => {
  it.each(RELEASED.map((_stores, index) => index + 1))('version %i', async (version) => {
    const server = new OfflineServer();
    const job = server.addJob(smallPlan());
    const { tablet, offline } = await openTablet(server, { job });
    server.isAway = true;
    const made = await recordAll({ tablet, offline }, job, firstWork(20));
    const dump = await Promise.all(
      offline.db.tables.map(async (table) => [table.name, await table.toArray()] as const),
    );
    offline.db.close();

    const name = `released-${version}`;
    const old = new Dexie(name);
    RELEASED.slice(0, version).forEach((stores, index) => old.version(index + 1).stores(stores));
    for (const [table, rows] of dump) await old.table(table).bulkAdd(rows);
    old.close();

    const later = tablet.open({ db: openFloorDatabase(name) });
    server.isAway = false;
    must(await later.sync.now());
    const arrived = server.entriesOf(job).slice(1);
    expect(arrived.map(({ id }) => id)).toEqual(made.map(({ id }) => id));
    const view = await later.jobs.open(job);
    const rows = await later.db.entries.orderBy(':id').toArray();
    expect(view.state).toEqual(
      rows.map(({ recorded }) => recorded).reduce(applyEntry, emptyJob(smallPlan())),
    );
  });

  it('names every store of today in the last released version', () => {
    const today = openFloorDatabase('names').tables.map(({ name }) => name);
    expect(today.sort()).toEqual(RELEASED.flatMap((stores) => Object.keys(stores)).sort());
  });
});

describe('the place on a job', () => {
  it('comes back exactly, and says whether nobody was there', async () => {
    const { tablet, offline } = await openTablet(new OfflineServer());
    await keepPlace(offline, 'job-1', { step: 'strip.rags-out', screen: { sheet: 'list', typed: '1' } });
    tablet.now += 3 * 60_000;
    const place = await readPlace(offline, 'job-1');
    expect(place).toMatchObject({ step: 'strip.rags-out', screen: { sheet: 'list', typed: '1' } });
    expect(wasAway(place!, tablet.now)).toBe(true);
    await noteActivity(offline, 'job-1');
    expect(wasAway((await readPlace(offline, 'job-1'))!, tablet.now + 1000)).toBe(false);
    expect(await readPlace(offline, 'job-2')).toBeUndefined();
  });
});
