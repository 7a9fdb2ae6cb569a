import { mkdirSync } from 'node:fs';
import path from 'node:path';
import pino, { type Logger } from 'pino';
import { migrate } from '@db/migrate';
import { type Auth, makeAuth } from './auth';
import { type Clock, type Ids, randomIds, stamp, systemClock } from './clock';
import { type Db, openDatabase } from './database';
import { forgetStoredFolds } from './job-fold';
import { noteKeyRenewals } from './key-renewals';
import { type Keys, openKeys } from './keys';
import { readSettings, type Settings } from './settings';

/** Everything that a request needs, opened once. */
export interface App {
  settings: AppSettings;
  db: Db;
  auth: Auth;
  keys: Keys;
  clock: Clock;
  ids: Ids;
  log: Logger;
}

/** The part of the settings that the program inside the server needs. */
export type AppSettings = Pick<Settings, 'dataDir' | 'publicUrl' | 'demo'> &
  Partial<Pick<Settings, 'bucket'>>;

export interface OpenOptions {
  clock?: Clock;
  ids?: Ids;
  log?: Logger;
}

/** Opens a data folder: brings its tables up to date, reads or makes its keys, and sets the sign-in up. */
export async function openApp(settings: AppSettings, options: OpenOptions = {}): Promise<App> {
  const clock = options.clock ?? systemClock;
  const ids = options.ids ?? randomIds;
  const log = options.log ?? makeLog();
  mkdirSync(settings.dataDir, { recursive: true, mode: 0o700 });
  const keys = openKeys(settings.dataDir, stamp(clock));
  const db = openDatabase(path.join(settings.dataDir, 'witnessmark.db'));
  try {
    await migrate(db);
    await forgetStoredFolds(db);
    await noteKeyRenewals({ db, keys, clock, ids });
  } catch (error) {
    await db.destroy();
    throw error;
  }
  const auth = makeAuth({ db, secret: keys.signInSecret, publicUrl: settings.publicUrl, log, ids });
  return { settings, db, auth, keys, clock, ids, log };
}

/** Closes the database; the app is not to be used after. */
export async function closeApp(app: App): Promise<void> {
  await app.db.destroy();
}

/*
 * The one open app of this process. It hangs on a global symbol because the server file and the built pages
 * are bundled apart and would otherwise each open the database.
 */
const slot = Symbol.for('witnessmark.app');
const holder = globalThis as unknown as Record<symbol, Promise<App> | undefined>;

/** The app of this process, opened from the environment at its first use. */
export function getApp(): Promise<App> {
  holder[slot] ??= openApp(readSettings(process.env, process.cwd()));
  return holder[slot];
}

/** Makes an app that is already open the app of this process. */
export function provideApp(app: App | undefined): void {
  holder[slot] = app === undefined ? undefined : Promise.resolve(app);
}

function makeLog(): Logger {
  const secrets = ['password', 'pin', 'credential', 'token', 'authorization', 'cookie'];
  return pino({
    level: process.env.LOG_LEVEL ?? 'info',
    redact: secrets.flatMap((name) => [name, `*.${name}`]),
  });
}
