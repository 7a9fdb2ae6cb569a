import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { folderStorage } from './storage';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-storage-'));
});

afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

const key = `photos/${'ab'.repeat(32)}`;

describe('storage in a folder', () => {
  it('gives back exactly the bytes that were put', async () => {
    const storage = folderStorage(folder);
    await storage.put(key, Uint8Array.of(0, 255, 1, 254));
    expect([...((await storage.find(key)) ?? [])]).toEqual([0, 255, 1, 254]);
    expect(await storage.has(key)).toBe(true);
  });

  it('finds nothing under a key that was never put', async () => {
    expect(await folderStorage(folder).find(key)).toBeUndefined();
    expect(await folderStorage(folder).has(key)).toBe(false);
  });

  it('leaves nothing beside the file it wrote', async () => {
    const storage = folderStorage(folder);
    await storage.put(key, Uint8Array.of(1));
    await storage.put(key, Uint8Array.of(1));
    expect(readdirSync(path.join(folder, 'photos', 'ab'))).toEqual(['ab'.repeat(32)]);
  });

  it('forgets what was removed, and removing twice does no harm', async () => {
    const storage = folderStorage(folder);
    await storage.put(key, Uint8Array.of(1));
    await storage.remove(key);
    await storage.remove(key);
    expect(await storage.find(key)).toBeUndefined();
  });

  it('refuses a key that would leave its folder', async () => {
    await expect(async () => folderStorage(folder).put('../../etc/passwd', Uint8Array.of(1))).rejects.toThrow(
      RangeError,
    );
  });
});
