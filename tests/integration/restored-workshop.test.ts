/* People as the tablets knew them from entries of the workshop's trail that a restore took back. */
import 'fake-indexeddb/auto';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import * as z from 'zod';
import type { Role } from '@/domain/role';
import { makeAvailableOffline, pullWorkshop } from '@/offline/prefetch';
import { recordEntries, type Draft } from '@/offline/record';
import { makeTabletFile } from '@/offline/tablet-file';
import { addPerson, changeRoles, setActive } from '@/server/people';
import { bringInFile, tabletFileBody } from '@/server/tablet-file';
import { Browser, openAtDesk } from '../support/browser';
import { backUpTestApp, restoreTestApp } from '../support/database';
import { must, recorded } from '../support/offline-tablet';
import { type Hand, openShop, type Shop, trailOf } from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const HOUR = 3_600_000;
let shop: Shop;
let job: string;
let tablet: Browser;

beforeEach(async () => {
  shop = await openShop();
  const { ann, ben, supervisor } = shop.people;
  job = await openAtDesk(new Browser(shop, 'desk'));
  tablet = new Browser(shop, 'tablet');
  for (const person of [supervisor, ann, ben]) await tablet.signIn(person);
  must(await makeAvailableOffline(tablet.offline, job));
});

/** What a tablet saves: its name and photographs beside what the office sends on. */
const savedFile = z.looseObject(tabletFileBody.shape);

const remark = { kind: 'deviation-raised', data: { class: 'C', words: 'Seen.', blocks: false } } as const;

const activate = (person: Hand, isActive: boolean) =>
  shop.app.db
    .transaction()
    .execute((trx) => setActive(trx, shop.people.owner, person.id, isActive, shop.app));

const giveRoles = (person: Hand, roles: Role[]) =>
  shop.app.db.transaction().execute((trx) => changeRoles(trx, shop.people.owner, person.id, roles, shop.app));

async function restore(copy: string): Promise<void> {
  tablet.pass(HOUR);
  shop.app = await restoreTestApp(shop.app, copy);
}

async function record(by: Hand, draft: Draft): Promise<void> {
  recorded(await recordEntries(tablet.offline, job, [draft], { by: by.id }));
}

/** A judgement by somebody on the deviation that is open. */
async function dispose(by: Hand): Promise<void> {
  const raised = (await trailOf(shop.app, job)).find(({ kind }) => kind === 'deviation-raised');
  const data = { deviation: raised!.id, disposition: 'accept as is', reason: 'It may stay so.' } as const;
  await record(by, { kind: 'deviation-disposed', data });
}

const refusedAtServer = () => shop.app.db.selectFrom('refused_entry').select(['code', 'message']).execute();

const kinds = async () => (await trailOf(shop.app, job)).map(({ kind }) => kind);

const conflicts = async () =>
  (await trailOf(shop.app, job)).flatMap(({ body }) => {
    const { conflict } = JSON.parse(body) as { conflict?: { code: string } };
    return conflict === undefined ? [] : [conflict.code];
  });

describe('somebody who was let in again after the backup', () => {
  let copy: string;

  beforeEach(async () => {
    const { ben } = shop.people;
    await activate(ben, false);
    copy = await backUpTestApp(shop.app);
    await activate(ben, true);
    must(await pullWorkshop(tablet.offline));
    await record(ben, remark);
  });

  it('did what he did: it is recorded, with a conflict for the supervisor', async () => {
    await restore(copy);
    must(await tablet.offline.sync.now());
    expect(await refusedAtServer()).toEqual([]);
    expect(await conflicts()).toEqual(['inactive-person']);
    expect(await tablet.offline.db.outbox.count()).toBe(0);
  });

  it('is recorded without one where the owner has let him in again by then', async () => {
    await restore(copy);
    await activate(shop.people.ben, true);
    must(await tablet.offline.sync.now());
    expect(await kinds()).toContain('deviation-raised');
    expect(await conflicts()).toEqual([]);
  });

  it('is recorded too where it comes as the file of a tablet that never heard of the restore', async () => {
    const { file } = await makeTabletFile(tablet.offline);
    await restore(copy);
    const {
      v,
      format,
      tablet: id,
      savedAt,
      clockOffsetMs,
      entries,
    } = savedFile.parse(JSON.parse(await file.text()));
    const body = { v, format, tablet: id, savedAt, clockOffsetMs, entries };
    await bringInFile(shop.app, shop.people.supervisor, tabletFileBody.parse(body));
    expect(await refusedAtServer()).toEqual([]);
    expect(await conflicts()).toEqual(['inactive-person']);
  });

  it('is not taken for active on the tablet any more, once it has heard of the restore', async () => {
    const { ben } = shop.people;
    await restore(copy);
    must(await tablet.offline.sync.now());
    const outcome = await recordEntries(tablet.offline, job, [remark], { by: ben.id });
    expect(outcome).toMatchObject({ ok: false, code: 'inactive-person' });
  });
});

describe('what waits for a newer backup', () => {
  const waiting = async () =>
    (await tablet.offline.db.outbox.toArray()).map(({ where, code, reason }) => ({ where, code, reason }));

  it('says so where somebody was added after the backup, and what the owner does meanwhile', async () => {
    const { owner } = shop.people;
    const copy = await backUpTestApp(shop.app);
    const made = {
      name: 'Test Newcomer',
      email: 'newcomer@witnessmark.example',
      roles: ['technician'] as Role[],
    };
    const id = await shop.app.db.transaction().execute((trx) => addPerson(trx, owner, made, shop.app));
    const newcomer = { ...shop.people.ann, ...made, id, personId: id };
    await tablet.signIn(newcomer);
    await record(newcomer, remark);
    await restore(copy);
    tablet.session = undefined;
    must(await tablet.offline.sync.now());
    const reason = expect.stringContaining('the owner adds Test Newcomer again') as string;
    expect(await waiting()).toEqual([{ where: 'waiting', code: 'person-lost', reason }]);
    expect(await refusedAtServer()).toEqual([]);
  });

  it('says so where the job was opened after the backup, and how work goes on', async () => {
    const copy = await backUpTestApp(shop.app);
    job = await openAtDesk(new Browser(shop, 'desk'));
    must(await makeAvailableOffline(tablet.offline, job));
    await record(shop.people.ann, remark);
    await restore(copy);
    must(await tablet.offline.sync.now());
    const reason = expect.stringContaining('a supervisor opens the job again') as string;
    expect(await waiting()).toEqual([{ where: 'waiting', code: 'job-lost', reason }]);
  });
});

describe('a role that was given after the backup', () => {
  let copy: string;

  beforeEach(async () => {
    const { ben } = shop.people;
    copy = await backUpTestApp(shop.app);
    await giveRoles(ben, ['technician', 'supervisor']);
    must(await pullWorkshop(tablet.offline));
  });

  it('leaves an act recorded, with a conflict', async () => {
    await record(shop.people.ben, remark);
    await restore(copy);
    must(await tablet.offline.sync.now());
    expect(await refusedAtServer()).toEqual([]);
    expect(await conflicts()).toEqual(['author-differs']);
  });

  it('lets a judgement wait, in words, until it is given again', async () => {
    const { ben } = shop.people;
    await record(shop.people.ann, remark);
    must(await tablet.offline.sync.now());
    await dispose(ben);
    await restore(copy);
    must(await tablet.offline.sync.now());
    expect(await refusedAtServer()).toEqual([]);
    const rows = await tablet.offline.db.outbox.toArray();
    const row = rows.find(({ entry }) => entry.by === ben.id);
    expect(row).toMatchObject({ where: 'waiting', code: 'workshop-lost' });
    expect(row?.reason).toContain('The owner');
    await giveRoles(ben, ['technician', 'supervisor']);
    must(await tablet.offline.sync.now());
    expect(await tablet.offline.db.outbox.count()).toBe(0);
    expect(await kinds()).toContain('deviation-disposed');
  });

  it('lets a judgement be refused once the owner has decided otherwise', async () => {
    const { ben } = shop.people;
    await record(shop.people.ann, remark);
    must(await tablet.offline.sync.now());
    await dispose(ben);
    await restore(copy);
    must(await tablet.offline.sync.now());
    await giveRoles(ben, ['technician', 'auditor']);
    must(await tablet.offline.sync.now());
    expect(await refusedAtServer()).toMatchObject([{ code: 'author-differs' }]);
  });
});
