import { randomUUID } from 'node:crypto';
import { mkdir, open, readFile, rename, rm, stat } from 'node:fs/promises';
import path from 'node:path';

/** Where bytes that are no rows lie: photographs and their thumbnails, each under its own key. */
export interface Storage {
  /** Keeps bytes under a key; when it returns they are on disk, whole. */
  put(key: string, bytes: Uint8Array): Promise<void>;
  /** The bytes under a key, or undefined if there are none. */
  find(key: string): Promise<Uint8Array | undefined>;
  /** Whether there are bytes under a key. */
  has(key: string): Promise<boolean>;
  remove(key: string): Promise<void>;
}

const KEY = /^[a-z]+\/[0-9a-f]{64}$/;

/** Storage in a folder: written beside, synced, then renamed, so that a crash leaves no half file under a key. */
export function folderStorage(folder: string): Storage {
  return {
    put: (key, bytes) => putFile(fileOf(folder, key), bytes),
    find: (key) => findFile(fileOf(folder, key)),
    has: (key) => hasFile(fileOf(folder, key)),
    remove: (key) => rm(fileOf(folder, key), { force: true }),
  };
}

/** A key as it was given, if it is one: nothing else names a place anywhere. */
export function requireKey(key: string): string {
  if (!KEY.test(key)) throw new RangeError(`"${key}" is no storage key.`);
  return key;
}

/** Two levels of folders, so that none of them grows to a hundred thousand files. */
function fileOf(folder: string, key: string): string {
  const [kind = '', name = ''] = requireKey(key).split('/');
  return path.join(folder, kind, name.slice(0, 2), name);
}

async function putFile(file: string, bytes: Uint8Array): Promise<void> {
  const folder = path.dirname(file);
  await mkdir(folder, { recursive: true, mode: 0o700 });
  const beside = `${file}.${randomUUID()}`;
  try {
    const handle = await open(beside, 'wx', 0o600);
    try {
      await handle.writeFile(bytes);
      await handle.sync();
    } finally {
      await handle.close();
    }
    await rename(beside, file);
  } catch (error) {
    await rm(beside, { force: true });
    throw error;
  }
  await syncFolder(folder);
}

/** The new name itself has to reach the disk as well. */
async function syncFolder(folder: string): Promise<void> {
  const handle = await open(folder, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

async function findFile(file: string): Promise<Uint8Array | undefined> {
  try {
    return await readFile(file);
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return undefined;
    throw error;
  }
}

async function hasFile(file: string): Promise<boolean> {
  try {
    return (await stat(file)).isFile();
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return false;
    throw error;
  }
}
