import {
  constants,
  copyFile,
  mkdir,
  mkdtemp,
  readdir,
  readFile,
  rename,
  rm,
  writeFile,
} from 'node:fs/promises';
import path from 'node:path';
import SqliteDatabase from 'better-sqlite3';
import pino from 'pino';
import { extract } from 'tar';
import * as z from 'zod';
import { THE_WORKSHOP } from './actor';
import { BACKUP_FORMAT, BackupError, describe, toDisk } from './backup';
import type { Clock } from './clock';
import { closeApp, openApp } from './compose';
import { ERASURES_FILE, readErasures } from './erasure';
import { checkRecord, type RecordCheck } from './record-check';
import { openKeyFiles } from './sealed-keys';
import { appendWorkshopEntry } from './workshop-trail';

/*
 * A data folder from a backup. It is made beside its place, checked there, and only then gets its name, so that
 * a restore that fails leaves nothing behind and touches nothing that was there.
 */

const NAMES =
  /^(manifest\.json|witnessmark\.db|keys\.sealed|photos\/(photos|thumbs)\/[0-9a-f]{2}\/[0-9a-f]{64})$/;

const hash = z.string().regex(/^[0-9a-f]{64}$/);

const manifestSchema = z.strictObject({
  v: z.literal(1),
  format: z.literal(BACKUP_FORMAT),
  madeAt: z.string(),
  database: z.strictObject({ bytes: z.int(), hash }),
  keys: z.strictObject({ hash }),
  photographs: z.int(),
  elsewhere: z.boolean(),
  missing: z.array(hash),
});

export interface Restored {
  madeAt: string;
  check: RecordCheck;
  photographs: number;
  /** Photographs whose bytes are not in the backup, or not as they were. */
  missing: string[];
}

/** Restores into a data folder that is empty or not there; a broken record is restored only if `evenIfBroken`. */
export async function restoreBackup(
  file: string,
  dataDir: string,
  passphrase: string,
  {
    clock,
    evenIfBroken = false,
    erasures,
  }: { clock: Clock; evenIfBroken?: boolean; erasures?: string | undefined },
): Promise<Restored> {
  await requireEmpty(dataDir);
  await mkdir(path.dirname(dataDir), { recursive: true });
  const made = await mkdtemp(`${dataDir}.restoring-`);
  try {
    await unpack(file, made);
    const manifest = await readManifest(made);
    await checkFiles(made, manifest);
    await openKeysInto(made, passphrase);
    checkDatabase(path.join(made, 'witnessmark.db'));
    const missing = manifest.elsewhere ? [] : await checkPhotographs(made);
    const check = await openAndNote(made, manifest.madeAt, clock, evenIfBroken);
    for (const name of ['manifest.json', 'keys.sealed']) await rm(path.join(made, name));
    if (erasures !== undefined) await takeErasures(erasures, made);
    await toDisk(made);
    await rm(dataDir, { recursive: true, force: true });
    await rename(made, dataDir);
    await toDisk(path.dirname(dataDir));
    return { madeAt: manifest.madeAt, check, photographs: manifest.photographs, missing };
  } catch (error) {
    await rm(made, { recursive: true, force: true });
    throw error;
  }
}

/** What was erased since the backup is erased again at the next start. */
async function takeErasures(file: string, folder: string): Promise<void> {
  try {
    await readErasures(file);
    await copyFile(file, path.join(folder, ERASURES_FILE), constants.COPYFILE_EXCL);
  } catch (error) {
    throw new BackupError(
      `${file} could not be taken over as the erasures: ${words(error)}. Nothing was changed.`,
      {
        cause: error,
      },
    );
  }
}

async function requireEmpty(dataDir: string): Promise<void> {
  try {
    const names = await readdir(dataDir);
    if (names.length === 0) return;
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return;
    throw error;
  }
  throw new BackupError(
    `${dataDir} is not empty, and nothing in it was touched. Stop the server, move the folder away, and restore again; or set DATA_DIR to another folder.`,
  );
}

async function unpack(file: string, into: string): Promise<void> {
  try {
    await extract({
      file,
      cwd: into,
      strict: true,
      preserveOwner: false,
      filter: (name, entry) => NAMES.test(name) && 'type' in entry && entry.type === 'File',
    });
  } catch (error) {
    throw new BackupError(`${file} could not be unpacked: ${words(error)}. Nothing was changed.`, {
      cause: error,
    });
  }
}

async function readManifest(folder: string): Promise<z.infer<typeof manifestSchema>> {
  try {
    return manifestSchema.parse(JSON.parse(await readFile(path.join(folder, 'manifest.json'), 'utf8')));
  } catch (error) {
    throw new BackupError('This file is no backup of a workshop. Nothing was changed.', { cause: error });
  }
}

async function checkFiles(folder: string, manifest: z.infer<typeof manifestSchema>): Promise<void> {
  for (const [name, wanted] of [
    ['witnessmark.db', manifest.database.hash],
    ['keys.sealed', manifest.keys.hash],
  ] as const) {
    const found = await describe(path.join(folder, name)).catch(() => undefined);
    if (found?.hash === wanted) continue;
    throw new BackupError(
      `The backup is damaged: ${name} is not what was packed. Nothing was changed. Use another backup.`,
    );
  }
}

async function openKeysInto(folder: string, passphrase: string): Promise<void> {
  const files = await openKeyFiles(await readFile(path.join(folder, 'keys.sealed'), 'utf8'), passphrase);
  const keys = path.join(folder, 'keys');
  await mkdir(keys, { mode: 0o700 });
  for (const [name, text] of Object.entries(files)) {
    await writeFile(path.join(keys, name), text, { mode: 0o600, flush: true });
  }
}

function checkDatabase(file: string): void {
  const database = new SqliteDatabase(file, { readonly: true });
  try {
    const problems = database.pragma('integrity_check') as { integrity_check: string }[];
    const strays = database.pragma('foreign_key_check') as unknown[];
    const [first] = problems;
    if (first?.integrity_check === 'ok' && strays.length === 0) return;
    throw new BackupError(
      `The database in the backup is damaged (${first?.integrity_check ?? 'no answer'}; ${strays.length} rows without what they belong to). Nothing was changed. Use another backup.`,
    );
  } finally {
    database.close();
  }
}

/** The photographs that a row names and whose bytes are not those. */
async function checkPhotographs(folder: string): Promise<string[]> {
  const database = new SqliteDatabase(path.join(folder, 'witnessmark.db'), { readonly: true });
  const hashes = database.prepare<[], string>('select hash from photo order by hash').pluck().all();
  database.close();
  const missing: string[] = [];
  for (const name of hashes) {
    const file = path.join(folder, 'photos', 'photos', name.slice(0, 2), name);
    const found = await describe(file).catch(() => undefined);
    if (found?.hash === name) continue;
    missing.push(name);
    await rm(file, { force: true });
  }
  return missing;
}

/** Brings the tables up to date, follows every chain, and tells the workshop's trail of the restore. */
async function openAndNote(
  folder: string,
  backupMadeAt: string,
  clock: Clock,
  evenIfBroken: boolean,
): Promise<RecordCheck> {
  const settings = { dataDir: folder, publicUrl: 'http://localhost', demo: false };
  const app = await openApp(settings, { clock, log: pino({ level: 'silent' }) });
  try {
    const check = await checkRecord(app.db, app.keys.workshopKeys);
    const [broken] = check.breaks;
    if (broken !== undefined && !evenIfBroken) {
      throw new BackupError(
        `The record in the backup does not hold: trail ${broken.trail}, entry ${broken.seq}: ${broken.why} Nothing was changed. Use another backup, or restore it all the same with --even-if-broken.`,
      );
    }
    await app.db
      .transaction()
      .execute((trx) =>
        appendWorkshopEntry(
          trx,
          THE_WORKSHOP,
          { kind: 'restored', data: { backupMadeAt, breaks: check.breaks.length } },
          app,
        ),
      );
    return check;
  } finally {
    await closeApp(app);
  }
}

function words(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}
