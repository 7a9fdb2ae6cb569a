import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import pino from 'pino';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { POST as postErase } from '@/pages/api/jobs/[id]/erase';
import { GET as getPhoto } from '@/pages/api/photos/[hash]';
import { verifyTrail } from '@/domain/trail';
import { writeBackup } from '@/server/backup';
import { closeApp, openApp } from '@/server/compose';
import { ERASURES_FILE, repeatErasures } from '@/server/erasure';
import { photoStorage } from '@/server/photos';
import { checkRecord } from '@/server/record-check';
import { restoreBackup } from '@/server/restore';
import { nodeChecks } from '@/server/trail-checks';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  photoHash,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

vi.setConfig({ testTimeout: 60_000, hookTimeout: 60_000 });

const PASSPHRASE = 'a long enough passphrase';
const EVERYTHING = ['registration', 'vin', 'customerName', 'customerEmail'];
const MARKED = photoHash('arrival');

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, lead, ann]);
  job = await openTestJob(tablet, supervisor);
});

async function finish(): Promise<void> {
  const { supervisor, ann } = shop.people;
  await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit, { entries: 500, signs: true });
  await tablet.sync();
}

const erase = (body: object, as = shop.people.owner) =>
  ask(postErase, {
    as,
    params: { id: job.id },
    body: { fields: EVERYTHING, photographs: [], reason: 'the customer asked for it', ...body },
  });

const exported = async (as = shop.people.supervisor) =>
  (await ask(getExport, { as, params: { id: job.id } })).text;

describe('an erasure after handover', () => {
  it('takes values, salts, letters and marked photographs, and the export still verifies', async () => {
    await finish();
    const photo = { as: shop.people.owner, params: { hash: MARKED } };
    expect((await ask(getPhoto, photo)).status).toBe(200);
    expect(await exported()).toContain('Ada Testperson');

    expect((await erase({ photographs: [MARKED] })).status).toBe(200);

    const text = await exported();
    expect(text).not.toMatch(/Testperson|TW71|customer\.example|TEST0000000000001/);
    const verdict = await verifyTrail(text, nodeChecks());
    expect(verdict).toMatchObject({ ok: true });
    expect(verdict.ok && verdict.notes).toEqual(
      expect.arrayContaining([
        ...EVERYTHING.map((field) => `${field}: erased.`),
        `Photograph ${MARKED}: erased.`,
      ]),
    );
    expect((await ask(getPhoto, photo)).status).toBe(404);
    expect(await photoStorage(shop.app).has(`photos/${MARKED}`)).toBe(false);
    expect(await photoStorage(shop.app).has(`thumbs/${MARKED}`)).toBe(false);
    expect(await shop.app.db.selectFrom('mail').select('id').execute()).toEqual([]);
    expect(await shop.app.db.selectFrom('job_identity').selectAll().execute()).toEqual([]);
    expect((await checkRecord(shop.app.db, shop.app.keys.workshopKeys)).breaks).toEqual([]);
  });

  it('is told by an entry of the job and of the workshop, and reaches the tablet with the next sync', async () => {
    await finish();
    await erase({ fields: ['customerName'] });
    const last = (await trailOf(shop.app, job.id)).at(-1);
    expect(last?.kind).toBe('erased');
    expect(JSON.parse(last?.body ?? '{}')).toMatchObject({
      by: 'workshop',
      data: { fields: ['customerName'], decidedBy: shop.people.owner.personId },
    });
    const told = await shop.app.db
      .selectFrom('workshop_entry')
      .select('kind')
      .orderBy('seq', 'desc')
      .limit(1)
      .execute();
    expect(told).toEqual([{ kind: 'erased' }]);
  });

  it('leaves what it does not name, and can go on later', async () => {
    await finish();
    await erase({ fields: ['customerName'] });
    expect(await exported()).toContain('TW71 ABC');
    await erase({ fields: ['registration'] });
    expect(await exported()).not.toContain('TW71 ABC');
    expect(await verifyTrail(await exported(), nodeChecks())).toMatchObject({ ok: true });
  });

  it('is repeated after a restore from a backup that still had the values', async () => {
    await finish();
    const folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-erasure-test-'));
    try {
      const archive = path.join(folder, 'workshop.tar');
      const target = path.join(folder, 'restored');
      const { dataDir } = shop.app.settings;
      await writeBackup(dataDir, archive, PASSPHRASE, { clock: shop.app.clock });
      await erase({ photographs: [MARKED] });
      await restoreBackup(archive, target, PASSPHRASE, {
        clock: shop.app.clock,
        erasures: path.join(dataDir, ERASURES_FILE),
      });
      const app = await openApp(
        { ...shop.app.settings, dataDir: target },
        { clock: shop.app.clock, ids: shop.app.ids, log: pino({ level: 'silent' }) },
      );
      try {
        expect(await app.db.selectFrom('job_identity').selectAll().execute()).not.toEqual([]);
        expect(await repeatErasures(app)).toBe(1);
        expect(await repeatErasures(app)).toBe(0);
        expect(await app.db.selectFrom('job_identity').selectAll().execute()).toEqual([]);
        expect(await photoStorage(app).has(`photos/${MARKED}`)).toBe(false);
        expect((await trailOf(app, job.id)).at(-1)?.kind).toBe('erased');
        expect((await checkRecord(app.db, app.keys.workshopKeys)).breaks).toEqual([]);
      } finally {
        await closeApp(app);
      }
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  });
});

describe('an erasure', () => {
  it('is the owner’s alone, and not of a job that is running', async () => {
    const running = await erase({});
    expect(running.status).toBe(409);
    expect(running.text).toContain('still running');
    await finish();
    for (const as of [shop.people.supervisor, shop.people.lead, shop.people.auditor, shop.people.ann]) {
      expect((await erase({}, as)).status).toBe(403);
    }
    expect(await exported()).toContain('Ada Testperson');
  });

  it.each([
    ['a field that there is none of', { fields: ['odometer'] }],
    ['a photograph that is not marked', { fields: [], photographs: ['ab'.repeat(32)] }],
    ['nothing', { fields: [] }],
    ['no reason', { reason: '' }],
  ])('of %s is refused', async (_, body) => {
    await finish();
    expect((await erase(body)).status).toBe(400);
    expect((await trailOf(shop.app, job.id)).map(({ kind }) => kind)).not.toContain('erased');
  });

  it('without its entry makes a trail that does not verify', async () => {
    await finish();
    await shop.app.db.deleteFrom('job_identity').where('field', '=', 'vin').execute();
    expect(await verifyTrail(await exported(), nodeChecks())).toMatchObject({
      ok: false,
      brokenAt: 'identity: vin',
    });
  });
});
