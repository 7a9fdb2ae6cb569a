import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { chmod, mkdtemp, open, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import path from 'node:path';
import SqliteDatabase from 'better-sqlite3';
import { create, replace } from 'tar';
import { type Clock, stamp } from './clock';
import { sealKeyFiles } from './sealed-keys';

/*
 * One archive of a data folder, made while the server runs. The database is copied by SQLite's own backup, never
 * as a file, since a copied file loses what is still in its log. Photographs are stored before the rows that name
 * them, so whatever a row of the copy names is there to be packed after it.
 */

export const BACKUP_FORMAT = 'witnessmark-backup';

/** What stands first in an archive. */
export interface Manifest {
  v: 1;
  format: typeof BACKUP_FORMAT;
  madeAt: string;
  database: { bytes: number; hash: string };
  keys: { hash: string };
  photographs: number;
  /** They lie in a bucket, and are backed up there. */
  elsewhere: boolean;
  /** Photographs that a row names and whose bytes were not there. */
  missing: string[];
}

/** A backup or a restore that can't be done; its words say why and what to do. */
export class BackupError extends Error {
  override name = 'BackupError';
  readonly code = 'backup';
}

/** Writes the archive; it appears under its name only when it is whole and on disk. */
export async function writeBackup(
  dataDir: string,
  file: string,
  passphrase: string,
  { clock, hasBucket = false }: { clock: Clock; hasBucket?: boolean },
): Promise<Manifest> {
  await requireAbsent(file);
  const staging = await mkdtemp(`${file}.`);
  const packed = path.join(staging, 'archive.tar');
  try {
    await copyDatabase(path.join(dataDir, 'witnessmark.db'), path.join(staging, 'witnessmark.db'));
    await writeFile(path.join(staging, 'keys.sealed'), await sealKeys(dataDir, passphrase));
    const { present, missing } = hasBucket
      ? { present: [], missing: [] }
      : await findPhotographs(dataDir, path.join(staging, 'witnessmark.db'));
    const manifest: Manifest = {
      v: 1,
      format: BACKUP_FORMAT,
      madeAt: stamp(clock),
      database: await describe(path.join(staging, 'witnessmark.db')),
      keys: { hash: (await describe(path.join(staging, 'keys.sealed'))).hash },
      photographs: present.length,
      elsewhere: hasBucket,
      missing,
    };
    await writeFile(path.join(staging, 'manifest.json'), JSON.stringify(manifest, undefined, 2));
    const plain = { file: packed, portable: true } as const;
    await create({ ...plain, cwd: staging }, ['manifest.json', 'witnessmark.db', 'keys.sealed']);
    if (present.length > 0) await replace({ ...plain, cwd: dataDir }, present);
    await chmod(packed, 0o600);
    await toDisk(packed);
    await rename(packed, file);
    await toDisk(path.dirname(file));
    return manifest;
  } finally {
    await rm(staging, { recursive: true, force: true });
  }
}

async function requireAbsent(file: string): Promise<void> {
  const isThere = await stat(file).then(
    () => true,
    () => false,
  );
  if (isThere) {
    throw new BackupError(`${file} is there already. Nothing was written: give the backup another name.`);
  }
}

async function copyDatabase(from: string, to: string): Promise<void> {
  let source: SqliteDatabase.Database;
  try {
    source = new SqliteDatabase(from, { readonly: true, fileMustExist: true });
  } catch (error) {
    throw new BackupError(
      `There is no database at ${from}. Set DATA_DIR to the data folder that is to be backed up.`,
      { cause: error },
    );
  }
  try {
    await source.backup(to);
  } finally {
    source.close();
  }
  // The copy is one file from here on: nothing of it may stay in a log beside it.
  const copy = new SqliteDatabase(to);
  copy.pragma('journal_mode = DELETE');
  copy.close();
}

async function sealKeys(dataDir: string, passphrase: string): Promise<string> {
  const folder = path.join(dataDir, 'keys');
  const names = (await readdir(folder)).filter((name) => name.endsWith('.json'));
  const texts = await Promise.all(names.map((name) => readFile(path.join(folder, name), 'utf8')));
  return sealKeyFiles(Object.fromEntries(names.map((name, index) => [name, texts[index] ?? ''])), passphrase);
}

/** Paths within the data folder of every photograph and thumbnail that the copy has a row for. */
async function findPhotographs(
  dataDir: string,
  database: string,
): Promise<{ present: string[]; missing: string[] }> {
  const copy = new SqliteDatabase(database, { readonly: true });
  const hashes = copy.prepare<[], string>('select hash from photo order by hash').pluck().all();
  copy.close();
  const found = { present: [] as string[], missing: [] as string[] };
  for (const hash of hashes) {
    const [full, thumb] = ['photos', 'thumbs'].map((kind) =>
      ['photos', kind, hash.slice(0, 2), hash].join('/'),
    );
    for (const [name, isNeeded] of [
      [full, true],
      [thumb, false],
    ] as const) {
      if (name === undefined) continue;
      if (await isFile(path.join(dataDir, name))) found.present.push(name);
      else if (isNeeded) found.missing.push(hash);
    }
  }
  return found;
}

async function isFile(file: string): Promise<boolean> {
  try {
    return (await stat(file)).isFile();
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return false;
    throw error;
  }
}

/** Size and SHA-256 of a file, read as a stream. */
export async function describe(file: string): Promise<{ bytes: number; hash: string }> {
  const hash = createHash('sha256');
  let bytes = 0;
  for await (const chunk of createReadStream(file) as AsyncIterable<Buffer>) {
    hash.update(chunk);
    bytes += chunk.length;
  }
  return { bytes, hash: hash.digest('hex') };
}

/** A file's bytes, or a folder's names, on disk before anybody is told. */
export async function toDisk(file: string): Promise<void> {
  const handle = await open(file, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}
