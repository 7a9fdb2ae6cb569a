/* Tablets and keys that a restored server does not know, because they were enrolled after the backup was made. */
import 'fake-indexeddb/auto';
import { spawnSync } from 'node:child_process';
import { rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { type WorkshopRecord, workshopLines } from '@/domain/workshop-words';
import { verifyTrail } from '@/domain/trail';
import { readLostKeys } from '@/offline/lost-keys';
import { makeAvailableOffline } from '@/offline/prefetch';
import { recordEntries, type Draft } from '@/offline/record';
import { readSyncStatus, signInAgainWords } from '@/offline/sync-status';
import { listSignedIn, readTablet } from '@/offline/tablet';
import { POST as postDevices } from '@/pages/api/devices/index';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { POST as postKeys } from '@/pages/api/keys/index';
import { revokeKey } from '@/server/author-keys';
import { changeDevice } from '@/server/device-changes';
import { nodeChecks } from '@/server/trail-checks';
import { Browser, openAtDesk } from '../support/browser';
import { backUpTestApp, restoreTestApp } from '../support/database';
import { must, recorded } from '../support/offline-tablet';
import { ask, type Hand, openShop, type Shop, trailOf } from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const HOUR = 3_600_000;
let shop: Shop;
let job: string;

beforeEach(async () => {
  shop = await openShop();
  job = await openAtDesk(new Browser(shop, 'desk'));
});

const remark = (words: string): Draft => ({
  kind: 'deviation-raised',
  data: { class: 'C', words, blocks: false },
});

async function raise({ offline }: Browser, by: Hand, words: string): Promise<void> {
  recorded(await recordEntries(offline, job, [remark(words)], { by: by.id }));
}

async function newTablet(name: string, ...people: Hand[]): Promise<Browser> {
  const tablet = new Browser(shop, name);
  for (const person of people) await tablet.signIn(person);
  must(await makeAvailableOffline(tablet.offline, job));
  return tablet;
}

const backUp = () => backUpTestApp(shop.app);

/** Puts the server back; whoever signed in after the copy was made has no session any more. */
async function restore(copy: string, ...signedOut: Browser[]): Promise<void> {
  shop.app.clock.advance(HOUR);
  shop.app = await restoreTestApp(shop.app, copy);
  for (const browser of signedOut) browser.session = undefined;
}

/** What the job's trail holds of what people said, and who said it on which tablet. */
async function said(): Promise<(readonly [string | null, string | null, string])[]> {
  const rows = await trailOf(shop.app, job);
  return rows
    .filter(({ kind }) => kind === 'deviation-raised')
    .map(({ by_person, device_id, body }) => {
      const { data } = JSON.parse(body) as { data: { words: string } };
      return [by_person, device_id, data.words] as const;
    });
}

const waitingOf = async ({ offline }: Browser) =>
  (await offline.db.outbox.toArray()).map(({ where, code }) => [where, code]);

const refusedAtServer = () => shop.app.db.selectFrom('refused_entry').selectAll().execute();

async function workshopWords(): Promise<string[]> {
  const rows = await shop.app.db.selectFrom('workshop_entry').select('body').orderBy('seq').execute();
  return workshopLines(rows.map(({ body }) => JSON.parse(body) as WorkshopRecord)).map(({ words }) => words);
}

const wordsFor = async ({ offline }: Browser) => {
  await offline.sync.now();
  const { signInAgain } = await readSyncStatus(offline);
  return signInAgainWords(signInAgain);
};

/** Both verifiers find the job's export whole. */
async function expectVerified(): Promise<void> {
  const { text } = await ask(getExport, { as: shop.people.supervisor, params: { id: job } });
  expect(await verifyTrail(text, nodeChecks())).toMatchObject({ ok: true });
  const file = path.join(tmpdir(), `witnessmark-restored-${process.pid}.json`);
  writeFileSync(file, text);
  const { status, stdout } = spawnSync('python3', ['src/commands/verify_trail.py', file], {
    encoding: 'utf8',
  });
  rmSync(file);
  expect(stdout).toContain('Whole');
  expect(status).toBe(0);
}

describe('a key that was enrolled after the backup', () => {
  let tablet: Browser;
  let copy: string;

  beforeEach(async () => {
    const { ann, ben } = shop.people;
    tablet = await newTablet('tablet', ann);
    copy = await backUp();
    await tablet.signIn(ben);
    await raise(tablet, ben, 'before the restore');
    must(await tablet.offline.sync.now());
  });

  it('leaves its entries waiting, and they go in once its person signs in on the tablet again', async () => {
    const { ben } = shop.people;
    const { id } = await readTablet(tablet.offline);
    await restore(copy, tablet);
    must(await tablet.offline.sync.now());
    expect(await waitingOf(tablet)).toEqual([['waiting', 'key-lost']]);
    expect(await refusedAtServer()).toEqual([]);
    expect(await said()).toEqual([]);
    await tablet.signIn(ben);
    must(await tablet.offline.sync.now());
    expect(await said()).toEqual([[ben.id, id, 'before the restore']]);
    expect(await tablet.offline.db.outbox.count()).toBe(0);
    expect(await tablet.offline.db.refused.count()).toBe(0);
    await expectVerified();
  });

  it('is enrolled again as it was, and the workshop’s trail says why and when', async () => {
    const { ben } = shop.people;
    const before = await tablet.offline.db.authorKeys.get(ben.id);
    await restore(copy, tablet);
    must(await tablet.offline.sync.now());
    tablet.pass(HOUR);
    await tablet.signIn(ben);
    const rows = await shop.app.db.selectFrom('author_key').selectAll().execute();
    const found = rows.find(({ id }) => id === before!.id);
    expect(found).toMatchObject({ person_id: ben.id, public_key: before!.publicKey });
    expect(found!.enrolled_at).toBe(shop.app.clock.now().toISOString());
    expect((await workshopWords()).at(-1)).toBe(
      `Key ${before!.id} of ${ben.name} on Bay 1, enrolled again after the restore of 2031-05-06T08:00:00.000Z`,
    );
    expect(await readLostKeys(tablet.offline.db)).toEqual([]);
  });

  it('is enrolled again by itself where its person’s session is still the active one', async () => {
    const { ben } = shop.people;
    await restore(copy);
    must(await tablet.offline.sync.now());
    expect((await said()).map(([by]) => by)).toEqual([ben.id]);
    expect(await wordsFor(tablet)).toBeUndefined();
  });

  it('stops nobody’s work, and what is recorded meanwhile goes in after what waited', async () => {
    const { ann, ben } = shop.people;
    await restore(copy, tablet);
    must(await tablet.offline.sync.now());
    await raise(tablet, ben, 'after the restore');
    await raise(tablet, ann, 'hers');
    must(await tablet.offline.sync.now());
    expect(await said()).toEqual([]);
    await tablet.signIn(ben);
    must(await tablet.offline.sync.now());
    expect((await said()).map(([by, , words]) => [by, words])).toEqual([
      [ben.id, 'before the restore'],
      [ben.id, 'after the restore'],
      [ann.id, 'hers'],
    ]);
  });

  it('is told of on the screen: who has to sign in, and that nothing is lost', async () => {
    const { ben } = shop.people;
    expect(await wordsFor(tablet)).toBeUndefined();
    await restore(copy, tablet);
    const words = await wordsFor(tablet);
    expect(words).toContain(`${ben.name} has to sign in on this tablet again`);
    expect(words).toContain('Nothing is lost');
    const shown = await listSignedIn(tablet.offline);
    expect(shown).toContainEqual(expect.objectContaining({ person: ben.id, hasKey: true, mustSignIn: true }));
    await tablet.signIn(ben);
    expect(await wordsFor(tablet)).toBeUndefined();
  });

  it('is not enrolled by anybody else’s session', async () => {
    const { ann } = shop.people;
    await restore(copy);
    tablet.session = ann;
    must(await tablet.offline.sync.now());
    expect(await waitingOf(tablet)).toEqual([['waiting', 'key-lost']]);
    expect(await readLostKeys(tablet.offline.db)).toEqual([shop.people.ben.id]);
  });

  it('is waited for with what another tablet brings back of its entries', async () => {
    const { ann, ben } = shop.people;
    const other = await newTablet('other', ann);
    must(await other.offline.sync.now());
    await restore(copy, tablet);
    other.session = shop.people.ann;
    // The other tablet was enrolled after the backup too.
    expect(await other.offline.sync.now()).toMatchObject({ ok: false, code: 'enrol-again' });
    await other.signIn(ann);
    must(await other.offline.sync.now());
    expect(await waitingOf(other)).toEqual([['waiting', 'key-lost']]);
    expect(await wordsFor(other)).toBeUndefined();
    expect(await refusedAtServer()).toEqual([]);
    await tablet.signIn(ben);
    must(await tablet.offline.sync.now());
    must(await other.offline.sync.now());
    for (const one of [tablet, other]) expect(await one.offline.db.outbox.count()).toBe(0);
    expect((await said()).map(([by]) => by)).toEqual([ben.id]);
    await expectVerified();
  });

  it('is refused for good once its tablet is declared lost, for then nobody can enrol it there', async () => {
    const { owner } = shop.people;
    const other = await newTablet('other', shop.people.ann);
    must(await other.offline.sync.now());
    await restore(copy, tablet);
    const { id } = await readTablet(tablet.offline);
    await changeDevice(shop.app, owner, id, { state: 'lost', reason: 'left in a van' });
    expect(await other.offline.sync.now()).toMatchObject({ code: 'enrol-again' });
    await other.signIn(shop.people.ann);
    must(await other.offline.sync.now());
    expect(await refusedAtServer()).toMatchObject([{ code: 'key-unknown' }]);
    expect(await said()).toEqual([]);
  });
});

describe('a tablet that was enrolled after the backup', () => {
  it('is enrolled again under its id, and everything on it goes in', async () => {
    const { ann, ben } = shop.people;
    const copy = await backUp();
    const tablet = await newTablet('tablet', ben, ann);
    await raise(tablet, ben, 'his');
    await raise(tablet, ann, 'hers');
    must(await tablet.offline.sync.now());
    await raise(tablet, ben, 'not sent yet');
    const { id } = await readTablet(tablet.offline);
    await restore(copy, tablet);
    expect(await tablet.offline.sync.now()).toMatchObject({ ok: false, code: 'enrol-again' });
    await tablet.signIn(ann);
    must(await tablet.offline.sync.now());
    expect(await readTablet(tablet.offline)).toMatchObject({ id, enrolled: true });
    expect(await wordsFor(tablet)).toContain(`${ben.name} has to sign in`);
    expect(await refusedAtServer()).toEqual([]);
    await tablet.signIn(ben);
    must(await tablet.offline.sync.now());
    expect(await said()).toEqual([
      [ben.id, id, 'his'],
      [ann.id, id, 'hers'],
      [ben.id, id, 'not sent yet'],
    ]);
    expect(await tablet.offline.db.outbox.count()).toBe(0);
    expect(await workshopWords()).toContain(
      'Tablet enrolled: Bay 1, again after the restore of 2031-05-06T08:00:00.000Z',
    );
    await expectVerified();
  });

  it('keeps its id and its keys when the reply to that is lost', async () => {
    const { ben } = shop.people;
    const copy = await backUp();
    const tablet = await newTablet('tablet', ben);
    await raise(tablet, ben, 'his');
    must(await tablet.offline.sync.now());
    const { id } = await readTablet(tablet.offline);
    await restore(copy);
    await tablet.offline.sync.now();
    tablet.lostReplies = 1;
    await expect(tablet.signIn(ben)).rejects.toThrow();
    await tablet.signIn(ben);
    must(await tablet.offline.sync.now());
    expect(await said()).toEqual([[ben.id, id, 'his']]);
  });
});

describe('a server that was not restored, or that knows better', () => {
  it('refuses a key that it does not know', async () => {
    const { ben } = shop.people;
    const tablet = await newTablet('tablet', ben);
    await shop.app.db.deleteFrom('author_key').where('person_id', '=', ben.id).execute();
    await raise(tablet, ben, 'his');
    must(await tablet.offline.sync.now());
    expect(await refusedAtServer()).toMatchObject([{ code: 'key-unknown' }]);
  });

  it('takes no claim of a restore that its trail does not tell of', async () => {
    const { ben } = shop.people;
    const tablet = new Browser(shop, 'tablet');
    await tablet.signIn(ben);
    const credential = 'a'.repeat(43);
    const id = shop.app.ids.next();
    const enrolled = await ask(postDevices, { as: ben, body: { id, name: 'Bay 9', credential } });
    expect(enrolled).toMatchObject({ status: 201 });
    expect((enrolled.body as { credential: string }).credential).not.toBe(credential);
    expect((await workshopWords()).at(-1)).toBe('Tablet enrolled: Bay 9');
    const publicKey = (await tablet.offline.db.authorKeys.get(ben.id))!.publicKey;
    const device = `${id}.${(enrolled.body as { credential: string }).credential}`;
    const asked = { as: ben, tablet: device, body: { publicKey, again: true } };
    expect(await ask(postKeys, asked)).toMatchObject({ status: 409 });
  });

  it('gives a known tablet’s id to nobody who has not its credential', async () => {
    const { ann, ben } = shop.people;
    const tablet = await newTablet('tablet', ben);
    const { id } = await readTablet(tablet.offline);
    const copy = await backUp();
    await restore(copy);
    const body = { id, name: 'Bay 1', credential: 'a'.repeat(43) };
    expect(await ask(postDevices, { as: ann, body })).toMatchObject({ status: 409 });
  });

  it('keeps refusing a key that was revoked before the backup', async () => {
    const { ben } = shop.people;
    const tablet = await newTablet('tablet', ben);
    const key = (await tablet.offline.db.authorKeys.get(ben.id))!;
    shop.app.clock.advance(1000);
    await shop.app.db.transaction().execute((trx) => revokeKey(trx, ben, key.id, shop.app));
    const copy = await backUp();
    await restore(copy);
    must(await tablet.offline.sync.now());
    tablet.now = shop.app.clock.now().getTime();
    await raise(tablet, ben, 'after it was revoked');
    must(await tablet.offline.sync.now());
    expect(await refusedAtServer()).toMatchObject([{ code: 'key-revoked' }]);
    const { credential } = (await tablet.offline.db.meta.get('device'))!.value as { credential: string };
    const { id } = await readTablet(tablet.offline);
    const asked = { as: ben, tablet: `${id}.${credential}`, body: { publicKey: key.publicKey, again: true } };
    expect(await ask(postKeys, asked)).toMatchObject({ status: 409 });
  });

  it('keeps refusing a tablet that was declared lost before the backup', async () => {
    const { ben, owner } = shop.people;
    const tablet = await newTablet('tablet', ben);
    await raise(tablet, ben, 'from the lost one');
    const { id } = await readTablet(tablet.offline);
    await changeDevice(shop.app, owner, id, { state: 'lost', reason: 'left in a van' });
    const copy = await backUp();
    await restore(copy);
    expect(await tablet.offline.sync.now()).toMatchObject({ ok: false, code: 'lost-tablet' });
    const { credential } = (await tablet.offline.db.meta.get('device'))!.value as { credential: string };
    const again = { as: ben, body: { id, name: 'Bay 1', credential } };
    expect(await ask(postDevices, again)).toMatchObject({ status: 409 });
    expect(await said()).toEqual([]);
  });
});
