import { createHash } from 'node:crypto';
import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import SqliteDatabase from 'better-sqlite3';
import pino from 'pino';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { verifyTrail } from '@/domain/trail';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { BackupError, writeBackup } from '@/server/backup';
import { closeApp, openApp, provideApp } from '@/server/compose';
import { noteKeyRenewals } from '@/server/key-renewals';
import { renewHeadKey } from '@/server/keys';
import { photoStorage } from '@/server/photos';
import { checkRecord } from '@/server/record-check';
import { restoreBackup } from '@/server/restore';
import { nodeChecks } from '@/server/trail-checks';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  pushTo,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

vi.setConfig({ testTimeout: 60_000, hookTimeout: 30_000 });

const PASSPHRASE = 'a long enough passphrase';

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;
let folder: string;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-backup-test-'));
  shop = await openShop();
  const { supervisor, ann } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann]);
  job = await openTestJob(tablet, supervisor);
  await raise('before the backup');
});

afterEach(() => rmSync(folder, { recursive: true, force: true }));

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

async function raise(words: string): Promise<void> {
  await tablet.record(job.id, remark(words), { by: shop.people.ann });
  await tablet.sync();
}

const archive = () => path.join(folder, 'workshop.tar');
const target = () => path.join(folder, 'restored');
const backUp = (passphrase = PASSPHRASE) =>
  writeBackup(shop.app.settings.dataDir, archive(), passphrase, { clock: shop.app.clock });
const restore = (options: { passphrase?: string; evenIfBroken?: boolean } = {}) =>
  restoreBackup(archive(), target(), options.passphrase ?? PASSPHRASE, {
    clock: shop.app.clock,
    ...(options.evenIfBroken === undefined ? {} : { evenIfBroken: options.evenIfBroken }),
  });

/** Opens the restored folder as the server would, and makes it the app of this process. */
async function serveRestored() {
  const app = await openApp(
    { ...shop.app.settings, dataDir: target() },
    { clock: shop.app.clock, ids: shop.app.ids, log: pino({ level: 'silent' }) },
  );
  provideApp(app);
  return app;
}

/** A change to the database file by somebody who drops what refuses it. */
function tamper(dataDir: string, ...statements: string[]): void {
  const database = new SqliteDatabase(path.join(dataDir, 'witnessmark.db'));
  const triggers = database
    .prepare<[], string>("select name from sqlite_master where type = 'trigger'")
    .pluck();
  for (const name of triggers.all()) database.exec(`drop trigger "${name}"`);
  for (const statement of statements) database.exec(statement);
  database.close();
}

describe('a backup', () => {
  it('is made while the server runs, and gives the record back whole', async () => {
    const manifest = await backUp();
    expect(manifest.missing).toEqual([]);
    await raise('after the backup');
    const restored = await restore();
    expect(restored.check).toMatchObject({ jobs: 1, breaks: [] });
    expect(restored.missing).toEqual([]);
    const app = await serveRestored();
    try {
      const words = (await trailOf(app, job.id)).map(({ body }) => body);
      expect(words).toHaveLength(2);
      expect(words[1]).toContain('before the backup');
      const exported = await ask(getExport, { as: shop.people.supervisor, params: { id: job.id } });
      expect(await verifyTrail(exported.text, nodeChecks())).toMatchObject({
        ok: true,
        key: shop.app.keys.head.fingerprint,
      });
      const last = await app.db
        .selectFrom('workshop_entry')
        .select(['kind', 'body'])
        .where('kind', '=', 'restored')
        .executeTakeFirstOrThrow();
      expect(last.body).toContain(manifest.madeAt);
      const [photo] = await app.db.selectFrom('photo').select('hash').execute();
      expect(await photoStorage(app).has(`photos/${photo?.hash ?? ''}`)).toBe(true);
    } finally {
      await closeApp(app);
    }
  });

  it('holds the keys under the passphrase alone', async () => {
    await backUp();
    const bytes = readFileSync(archive());
    const { keys } = JSON.parse(
      readFileSync(path.join(shop.app.settings.dataDir, 'keys', 'head.json'), 'utf8'),
    ) as { keys: { privateKey: string }[] };
    expect(bytes.includes(keys[0]!.privateKey)).toBe(false);
    await expect(restore({ passphrase: 'another passphrase' })).rejects.toThrow('does not open the keys');
    expect(readdirSync(folder)).toEqual(['workshop.tar']);
  });

  it('leaves photographs that lie in a bucket to the bucket', async () => {
    const { clock, settings } = shop.app;
    const manifest = await writeBackup(settings.dataDir, archive(), PASSPHRASE, { clock, hasBucket: true });
    expect(manifest).toMatchObject({ photographs: 0, elsewhere: true, missing: [] });
    expect((await restore()).missing).toEqual([]);
  });

  it('is never written over another', async () => {
    await backUp();
    const before = createHash('sha256').update(readFileSync(archive())).digest('hex');
    await expect(backUp()).rejects.toThrow(BackupError);
    expect(createHash('sha256').update(readFileSync(archive())).digest('hex')).toBe(before);
  });
});

describe('a restore', () => {
  it('touches nothing in a folder that is not empty', async () => {
    await backUp();
    mkdirSync(target());
    writeFileSync(path.join(target(), 'note'), 'kept');
    await expect(restore()).rejects.toThrow('not empty');
    expect(readdirSync(target())).toEqual(['note']);
  });

  it.each([0.2, 0.5, 0.8])('refuses an archive with a byte changed at %s of the database', async (share) => {
    await backUp();
    const bytes = readFileSync(archive());
    const database = readFileSync(path.join(shop.app.settings.dataDir, 'witnessmark.db')).length;
    // The manifest and its header come first; then the database.
    const at = 2048 + Math.floor(database * share);
    bytes[at] = bytes[at]! ^ 1;
    writeFileSync(archive(), bytes);
    await expect(restore()).rejects.toThrow(/damaged|unpacked/);
    expect(existsSync(target())).toBe(false);
  });

  it('refuses what is no backup', async () => {
    writeFileSync(archive(), 'not an archive');
    await expect(restore()).rejects.toThrow(BackupError);
  });

  it('says where a record was altered, and restores it only if that is wanted', async () => {
    tamper(
      shop.app.settings.dataDir,
      `update job_entry set body = replace(body, 'before the backup', 'nothing to see'), hash = hash where seq = 2`,
    );
    await backUp();
    await expect(restore()).rejects.toThrow(/entry 2: Its content is not what its hash was made of/);
    expect(existsSync(target())).toBe(false);
    const { check } = await restore({ evenIfBroken: true });
    expect(check.breaks).toMatchObject([{ trail: job.id, seq: 2 }]);
  });

  it('takes from a tablet that is ahead what the backup does not have', async () => {
    await backUp();
    await tablet.record(job.id, remark('after the backup'), { by: shop.people.ann });
    const again = tablet.held(job.id).outbox.at(-1)!;
    await tablet.sync();
    const lost = await trailOf(shop.app, job.id);
    await restore();
    const app = await serveRestored();
    try {
      expect(await trailOf(app, job.id)).toHaveLength(2);
      // What the real tablet does when the server no longer holds its last entry: it sends it once more.
      const answer = await pushTo(tablet.credential, {
        device: tablet.device,
        sentAt: new Date(tablet.now).toISOString(),
        jobs: [{ id: job.id, have: { seq: 3, hash: lost[2]!.hash } }],
        entries: [again],
      });
      expect(answer.verdicts).toMatchObject([{ verdict: 'recorded' }]);
      const rows = await trailOf(app, job.id);
      expect(rows.filter(({ id }) => id === lost[2]!.id)).toMatchObject([
        { content_hash: lost[2]!.content_hash },
      ]);
      expect(rows.map(({ kind }) => kind)).toContain('restored');
      expect((await checkRecord(app.db, app.keys.workshopKeys)).breaks).toEqual([]);
    } finally {
      await closeApp(app);
    }
  });
});

describe('the check of the record', () => {
  const check = () => checkRecord(shop.app.db, shop.app.keys.workshopKeys);

  it('finds nothing in a record that was never touched', async () => {
    const { breaks, jobs, entries } = await check();
    expect(breaks).toEqual([]);
    expect(jobs).toBe(1);
    expect(entries).toBeGreaterThan(10);
  });

  it.each([
    [
      'an entry whose words were changed',
      `update job_entry set body = replace(body, 'before', 'after') where seq = 2`,
    ],
    ['a row that says another kind', `update job_entry set kind = 'done' where seq = 2`],
    [
      'a signature taken from another entry',
      `update job_entry set signature = (select signature from job_entry where seq = 1) where seq = 2`,
    ],
    ['a cut tail that a head was signed over', `delete from job_entry where seq = 1`],
    [
      'a workshop entry whose author was changed',
      `update workshop_entry set body = replace(body, '"by":"', '"by":"x') where seq = 2`,
    ],
    [
      'a tool whose calibration vanished from the trail',
      `delete from workshop_entry where kind = 'calibration-recorded'`,
    ],
  ])('finds %s', async (_, statement) => {
    tamper(shop.app.settings.dataDir, 'pragma foreign_keys = off', statement);
    expect((await check()).breaks).not.toEqual([]);
  });

  it('finds a job that vanished with all its rows', async () => {
    tamper(
      shop.app.settings.dataDir,
      'pragma foreign_keys = off',
      ...['job_entry', 'job_identity', 'job_person', 'job_fold'].map((table) => `delete from ${table}`),
      'delete from job',
    );
    expect((await check()).breaks).toEqual([
      { trail: job.id, seq: 1, why: 'The workshop knew this entry, and it is gone.' },
    ]);
  });
});

describe('a renewed key of the workshop', () => {
  it('signs exports that lead back to the key before it', async () => {
    const before = shop.app.keys.head.fingerprint;
    await backUp();
    await restore();
    const renewed = renewHeadKey(target(), '2031-06-01T08:00:00.000Z');
    expect(renewed.before).toBe(before);
    const app = await serveRestored();
    try {
      const exported = await ask(getExport, { as: shop.people.supervisor, params: { id: job.id } });
      expect(await verifyTrail(exported.text, { ...nodeChecks(), key: before })).toMatchObject({
        ok: true,
        key: renewed.now,
      });
      const told = () =>
        app.db
          .selectFrom('workshop_entry')
          .select('body')
          .where('kind', '=', 'workshop-key-renewed')
          .execute();
      const [entry, ...others] = await told();
      expect(others).toEqual([]);
      expect(JSON.parse(entry!.body)).toMatchObject({ data: { key: renewed.now, before } });
      await noteKeyRenewals(app);
      expect(await told()).toHaveLength(1);
    } finally {
      await closeApp(app);
    }
  });
});
