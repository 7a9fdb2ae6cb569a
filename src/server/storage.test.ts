import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type LocalBucket, startLocalBucket } from '../../tests/support/local-bucket';
import { bucketStorage } from './bucket-storage';
import { folderStorage, type Storage } from './storage';

let folder: string;
let store: LocalBucket;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-storage-'));
  store = await startLocalBucket();
});

afterEach(async () => {
  rmSync(folder, { recursive: true, force: true });
  await store.stop();
});

const key = `photos/${'ab'.repeat(32)}`;

describe.each<[string, () => Storage]>([
  ['a folder', () => folderStorage(folder)],
  ['a bucket', () => bucketStorage(store)],
])('storage in %s', (_, open) => {
  it('gives back exactly the bytes that were put', async () => {
    const storage = open();
    await storage.put(key, Uint8Array.of(0, 255, 1, 254));
    expect([...((await storage.find(key)) ?? [])]).toEqual([0, 255, 1, 254]);
    expect(await storage.has(key)).toBe(true);
  });

  it('takes a whole photograph and the same one again', async () => {
    const storage = open();
    const bytes = new Uint8Array(3_000_000).map((_, at) => at % 251);
    await storage.put(key, bytes);
    await storage.put(key, bytes);
    expect(Buffer.from((await storage.find(key)) ?? []).equals(bytes)).toBe(true);
  });

  it('finds nothing under a key that was never put', async () => {
    expect(await open().find(key)).toBeUndefined();
    expect(await open().has(key)).toBe(false);
  });

  it('forgets what was removed, and removing twice does no harm', async () => {
    const storage = open();
    await storage.put(key, Uint8Array.of(1));
    await storage.remove(key);
    await storage.remove(key);
    expect(await storage.find(key)).toBeUndefined();
  });

  it('refuses what is no key', async () => {
    await expect(async () => open().put('../../etc/passwd', Uint8Array.of(1))).rejects.toThrow(RangeError);
  });
});

describe('storage in a folder', () => {
  it('leaves nothing beside the file it wrote', async () => {
    const storage = folderStorage(folder);
    await storage.put(key, Uint8Array.of(1));
    await storage.put(key, Uint8Array.of(1));
    expect(readdirSync(path.join(folder, 'photos', 'ab'))).toEqual(['ab'.repeat(32)]);
  });
});

describe('storage in a bucket', () => {
  it('says what is wrong where the store does not know who asks, and takes nothing for absent', async () => {
    const stranger = bucketStorage({ ...store, secret: 'another secret' });
    await expect(stranger.put(key, Uint8Array.of(1))).rejects.toThrow();
    await expect(stranger.find(key)).rejects.toThrow();
    expect(store.objects.size).toBe(0);
  });

  it('throws where the store can not be reached', async () => {
    const gone = bucketStorage({ ...store, endpoint: 'http://127.0.0.1:9' });
    await expect(gone.find(key)).rejects.toThrow();
  });
});
