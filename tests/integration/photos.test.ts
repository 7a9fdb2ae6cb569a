import { createHash, randomBytes } from 'node:crypto';
import { readdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { sql } from 'kysely';
import sharp from 'sharp';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { EntryData } from '@/domain/entry';
import { GET as getJob } from '@/pages/api/jobs/[id]/index';
import { GET as getPhoto, PUT as putPhoto } from '@/pages/api/photos/[hash]';
import {
  ask,
  enrolTestTablet,
  type Hand,
  openShop,
  openTestJob,
  type Shop,
  type TestTablet,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;
let tablet: TestTablet;

beforeEach(async () => {
  shop = await openShop();
  tablet = await enrolTestTablet(shop, []);
});

const hashOf = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');

const picture = (format: 'jpeg' | 'png' | 'webp', width = 640) =>
  sharp({ create: { width, height: 400, channels: 3, background: { r: 120, g: 80, b: 40 } } })
    .toFormat(format)
    .toBuffer();

function put(bytes: Uint8Array, over: { hash?: string; type?: string; tablet?: string } = {}) {
  return ask(putPhoto, {
    method: 'PUT',
    tablet: over.tablet ?? tablet.credential,
    body: bytes,
    params: { hash: over.hash ?? hashOf(bytes) },
    headers: { 'content-type': over.type ?? 'image/jpeg' },
  });
}

async function fetchPhoto(hash: string, query = ''): Promise<Response> {
  return getPhoto({
    request: new Request(`http://localhost:4321/api/photos/${hash}${query}`, {
      headers: { authorization: `Tablet ${tablet.credential}` },
    }),
    params: { hash },
    locals: {},
  });
}

/** A photograph in the record of a job of Ann's, sent by her tablet. */
async function photographInJob() {
  const { supervisor, ann } = shop.people;
  const first = await enrolTestTablet(shop, [supervisor, ann]);
  const job = await openTestJob(first, supervisor);
  const bytes = await picture('jpeg');
  const hash = hashOf(bytes);
  const data: EntryData<'photographed'> = {
    photo: hash,
    bytes: bytes.byteLength,
    type: 'image/jpeg',
    from: 'camera here',
    subject: 's',
  };
  await first.record(job.id, { kind: 'photographed', data }, { by: ann });
  await first.sync();
  await put(bytes, { tablet: first.credential });
  return { job, hash, bytes, first };
}

describe('the bytes of a photograph', () => {
  const reads = async (hash: string, by: { as?: Hand; tablet?: string }) =>
    (await ask(getPhoto, { ...by, params: { hash } })).status;

  it('of an open job are for everybody at work, and for any tablet', async () => {
    const { hash } = await photographInJob();
    for (const person of Object.values(shop.people)) expect(await reads(hash, { as: person })).toBe(200);
    expect(await reads(hash, { tablet: tablet.credential })).toBe(200);
  });

  it('of a job that is over are for those who see all, and who had a part in it', async () => {
    const { job, hash, first } = await photographInJob();
    await shop.app.db.updateTable('job').set({ state: 'handed over' }).where('id', '=', job.id).execute();
    const { ann, ben, ...seeAll } = shop.people;
    for (const person of Object.values(seeAll)) expect(await reads(hash, { as: person })).toBe(200);
    expect(await reads(hash, { as: ann }), 'her own work').toBe(200);
    expect(await reads(hash, { as: ben }), 'a job of others').toBe(404);
    expect(await reads(hash, { tablet: first.credential }), 'the tablet that has a part in it').toBe(200);
    expect(await reads(hash, { tablet: tablet.credential }), 'another tablet').toBe(404);
    const small = await ask(getPhoto, { as: ben, params: { hash }, query: '?size=thumb' });
    expect(small.status, 'the small copy is no way round').toBe(404);
  });

  it('that no job names yet are for the tablet that sent them alone', async () => {
    const bytes = await picture('jpeg');
    await put(bytes);
    const other = await enrolTestTablet(shop, []);
    expect(await reads(hashOf(bytes), { tablet: tablet.credential })).toBe(200);
    expect(await reads(hashOf(bytes), { tablet: other.credential })).toBe(404);
    expect(await reads(hashOf(bytes), { as: shop.people.owner })).toBe(404);
  });

  it('are kept by no browser for the next person at it', async () => {
    const { hash } = await photographInJob();
    const { headers } = await ask(getPhoto, { as: shop.people.ben, params: { hash } });
    expect(headers.get('vary')).toBe('cookie, authorization');
  });

  it('are found by an index, however long the trails are', async () => {
    const plan = await sql<{ detail: string }>`explain query plan select job_id from job_entry
      where kind = 'photographed' and json_extract(body, '$.data.photo') = 'x'`.execute(shop.app.db);
    expect(plan.rows.map(({ detail }) => detail).join()).toContain('job_entry_photo');
  });

  it('are taken again where the disk lost them', async () => {
    const bytes = await picture('jpeg');
    await put(bytes);
    const hash = hashOf(bytes);
    rmSync(path.join(shop.app.settings.dataDir, 'photos', 'photos', hash.slice(0, 2), hash));
    expect((await fetchPhoto(hash)).status).toBe(404);
    expect((await put(bytes)).status).toBe(201);
    expect((await fetchPhoto(hash)).status).toBe(200);
  });
});

describe('the same picture in two jobs', () => {
  const elsewhere = async (job: string, as: Hand) =>
    ((await ask(getJob, { as, params: { id: job } })).body as { photographsElsewhere: unknown })
      .photographsElsewhere;

  it('is told of on the page of each, with the number of a job only to who may see that job', async () => {
    const { ben, supervisor, owner } = shop.people;
    const { job, hash } = await photographInJob();
    expect(await elsewhere(job.id, owner)).toEqual([]);
    const { job: second } = await photographInJob();
    expect(await elsewhere(job.id, owner)).toEqual([
      { hash, jobs: [{ id: second.id, number: second.number }], others: 0 },
    ]);
    expect(await elsewhere(second.id, supervisor)).toMatchObject([{ hash, jobs: [{ id: job.id }] }]);
    await shop.app.db.updateTable('job').set({ state: 'handed over' }).where('id', '=', second.id).execute();
    expect(await elsewhere(job.id, ben)).toEqual([{ hash, jobs: [], others: 1 }]);
  });
});

describe('a photograph', () => {
  it.each(['jpeg', 'png', 'webp'] as const)('in %s is kept and given back byte for byte', async (format) => {
    const bytes = await picture(format);
    expect(await put(bytes, { type: `image/${format}` })).toMatchObject({
      status: 201,
      body: { hash: hashOf(bytes) },
    });
    const answer = await fetchPhoto(hashOf(bytes));
    expect(Buffer.from(await answer.arrayBuffer()).equals(bytes)).toBe(true);
    expect(Object.fromEntries(answer.headers)).toMatchObject({
      'content-type': `image/${format}`,
      'x-content-type-options': 'nosniff',
      'cache-control': expect.stringContaining('private'),
    });
  });

  it('sent again does no harm', async () => {
    const bytes = await picture('jpeg');
    await put(bytes);
    expect(await put(bytes)).toMatchObject({ status: 200 });
    expect(await shop.app.db.selectFrom('photo').selectAll().execute()).toMatchObject([
      { hash: hashOf(bytes), bytes: bytes.byteLength, uploaded_by_device: tablet.device },
    ]);
  });

  it('has a small copy beside it', async () => {
    const bytes = await picture('jpeg', 2000);
    await put(bytes);
    const small = Buffer.from(await (await fetchPhoto(hashOf(bytes), '?size=thumb')).arrayBuffer());
    expect(await sharp(small).metadata()).toMatchObject({ format: 'webp', width: 480 });
  });

  it('whose bytes are not those of its name is refused', async () => {
    const answer = await put(await picture('jpeg'), { hash: 'a'.repeat(64) });
    expect(answer).toMatchObject({ status: 400, body: { error: { code: 'invalid-field', field: 'hash' } } });
  });

  it('that is no picture, half a picture, of another kind than it says, or moving is refused', async () => {
    const jpeg = await picture('jpeg');
    const frame = await picture('png');
    const other = await sharp(frame).negate().png().toBuffer();
    const moving = await sharp([frame, other], { join: { animated: true } })
      .webp()
      .toBuffer();
    const cases: [Uint8Array, string][] = [
      [randomBytes(2000), 'image/jpeg'],
      [jpeg.subarray(0, jpeg.length - 300), 'image/jpeg'],
      [jpeg, 'image/png'],
      [moving, 'image/webp'],
      [Buffer.from('<svg xmlns="http://www.w3.org/2000/svg" width="9" height="9"/>'), 'image/png'],
    ];
    for (const [index, [bytes, type]] of cases.entries()) {
      expect(await put(bytes, { type }), `case ${index}`).toMatchObject({
        status: 400,
        body: { error: { field: 'body' } },
      });
    }
    expect(await shop.app.db.selectFrom('photo').selectAll().execute()).toEqual([]);
  });

  it('that would be huge when opened is refused, however small its file', async () => {
    const background = { r: 0, g: 0, b: 0 };
    const huge = await sharp({
      create: { width: 9000, height: 9000, channels: 3, background },
      limitInputPixels: false,
    })
      .png({ compressionLevel: 9 })
      .toBuffer();
    expect(huge.byteLength).toBeLessThan(2_000_000);
    expect(await put(huge, { type: 'image/png' })).toMatchObject({ status: 400 });
  });

  it('needs a right type, less than 12 MB, and somebody known', async () => {
    const bytes = await picture('jpeg');
    expect(await put(bytes, { type: 'image/gif' })).toMatchObject({ status: 415 });
    expect(await put(Buffer.alloc(12_000_001))).toMatchObject({ status: 413 });
    expect(await put(bytes, { hash: 'nonsense' })).toMatchObject({ status: 400 });
    const nobody = await ask(putPhoto, {
      method: 'PUT',
      body: bytes,
      params: { hash: hashOf(bytes) },
      headers: { 'content-type': 'image/jpeg' },
    });
    expect(nobody).toMatchObject({ status: 401 });
    expect((await ask(getPhoto, { params: { hash: hashOf(bytes) } })).status).toBe(401);
  });

  it('that is not there is not found, also if only its bytes are gone', async () => {
    expect((await fetchPhoto('a'.repeat(64))).status).toBe(404);
    const bytes = await picture('jpeg');
    await put(bytes);
    const folder = path.join(shop.app.settings.dataDir, 'photos');
    expect(readdirSync(folder).sort()).toEqual(['photos', 'thumbs']);
    rmSync(path.join(folder, 'photos'), { recursive: true });
    expect((await fetchPhoto(hashOf(bytes))).status).toBe(404);
  });
});
