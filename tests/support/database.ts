import { copyFileSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { sql } from 'kysely';
import pino from 'pino';
import { afterEach } from 'vitest';
import { THE_WORKSHOP } from '@/server/actor';
import type { Clock, Ids } from '@/server/clock';
import { type App, closeApp, openApp, provideApp } from '@/server/compose';
import { appendWorkshopEntry } from '@/server/workshop-trail';

/*
 * A real data folder per test: the migrations run once a worker, and each test copies the file that they made.
 */

/** A clock that stands still until it is told to move. */
export interface SteppedClock extends Clock {
  advance(ms: number): void;
}

export const TEST_START = '2031-05-06T07:00:00.000Z';

/** A clock that starts at a time and moves only by `advance`. */
export function steppedClock(start: string = TEST_START): SteppedClock {
  let now = new Date(start).getTime();
  return {
    now: () => new Date(now),
    advance: (ms) => {
      now += ms;
    },
  };
}

/** Ids in the shape of UUIDv7 that count up, so that a test can foretell them. */
export function countingIds(): Ids {
  let last = 0;
  return {
    next: () => {
      last += 1;
      return `01970000-0000-7000-8000-${last.toString(16).padStart(12, '0')}`;
    },
  };
}

export interface TestApp extends App {
  clock: SteppedClock;
}

const open: { app: App; folder: string }[] = [];
let base: Promise<string> | undefined;

afterEach(async () => {
  provideApp(undefined);
  for (const { app, folder } of open.splice(0)) {
    await closeApp(app);
    rmSync(folder, { recursive: true, force: true });
  }
});

/** Opens an app on a fresh data folder and makes it the app of this process. */
export async function openTestApp(options: { publicUrl?: string } = {}): Promise<TestApp> {
  base ??= makeBase();
  const folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-test-'));
  copyFileSync(await base, path.join(folder, 'witnessmark.db'));
  const clock = steppedClock();
  const app = await openApp(
    { dataDir: folder, publicUrl: options.publicUrl ?? 'http://localhost:4321', demo: false },
    { clock, ids: countingIds(), log: pino({ level: 'silent' }) },
  );
  open.push({ app, folder });
  provideApp(app);
  return { ...app, clock };
}

/** Copies the database of an app as it stands, as a backup does; the answer is to be given to `restoreTestApp`. */
export async function backUpTestApp({ db, settings }: TestApp): Promise<string> {
  const copy = path.join(settings.dataDir, 'backup.db');
  rmSync(copy, { force: true });
  await sql`vacuum into ${copy}`.execute(db);
  return copy;
}

/** Puts the database back to such a copy and opens it anew; the workshop's trail tells of it, as of a restore. */
export async function restoreTestApp(app: TestApp, copy: string): Promise<TestApp> {
  const { settings, clock, ids, log } = app;
  const file = path.join(settings.dataDir, 'witnessmark.db');
  await closeApp(app);
  for (const end of ['-wal', '-shm']) rmSync(`${file}${end}`, { force: true });
  copyFileSync(copy, file);
  const opened = await openApp(settings, { clock, ids, log });
  for (const one of open) if (one.folder === settings.dataDir) one.app = opened;
  provideApp(opened);
  const data = { backupMadeAt: clock.now().toISOString(), breaks: 0 };
  await opened.db
    .transaction()
    .execute((trx) => appendWorkshopEntry(trx, THE_WORKSHOP, { kind: 'restored', data }, opened));
  return { ...opened, clock };
}

/** Makes the migrated file that the tests of this worker copy. */
async function makeBase(): Promise<string> {
  const folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-base-'));
  const app = await openApp(
    { dataDir: folder, publicUrl: 'http://localhost:4321', demo: false },
    { log: pino({ level: 'silent' }) },
  );
  await closeApp(app);
  process.once('exit', () => rmSync(folder, { recursive: true, force: true }));
  return path.join(folder, 'witnessmark.db');
}
