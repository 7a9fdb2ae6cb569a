import { createHash, randomBytes } from 'node:crypto';
import { readdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import sharp from 'sharp';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { GET as getPhoto, PUT as putPhoto } from '@/pages/api/photos/[hash]';
import { ask, enrolTestTablet, openShop, type Shop, type TestTablet } from '../support/tablet';

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
