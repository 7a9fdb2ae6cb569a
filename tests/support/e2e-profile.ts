import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { type BrowserContext, chromium, type Page } from '@playwright/test';
import type { Entry } from '@/domain/entry';

/*
 * A tablet whose browser dies: a profile folder of its own, so that what it held is there at its next start, and
 * processes that are killed by their ids, as when the battery is pulled.
 */

/** A browser profile that outlives its browser. */
interface Profile {
  start(): Promise<BrowserContext>;
  remove(): Promise<void>;
}

/** Makes a profile of its own for a browser that is started as the tests' browser is. */
export async function makeProfile(
  options: NonNullable<Parameters<typeof chromium.launchPersistentContext>[1]>,
): Promise<Profile> {
  const folder = await mkdtemp(path.join(tmpdir(), 'witnessmark-profile-'));
  return {
    start: () => chromium.launchPersistentContext(folder, options),
    remove: () => rm(folder, { recursive: true, force: true, maxRetries: 5 }),
  };
}

/** Finds the processes of a browser, and gives what kills them all at once, at any moment later. */
export async function prepareKill(context: BrowserContext): Promise<() => Promise<void>> {
  const browser = context.browser();
  if (browser === null) throw new Error('A browser that was started can be killed.');
  const session = await browser.newBrowserCDPSession();
  const closed = new Promise<void>((resolve) => context.once('close', () => resolve()));
  const { processInfo } = await session.send('SystemInfo.getProcessInfo');
  // The one that started the others first, so that it can not start them again.
  const pids = [...processInfo].sort((a, b) => rank(a.type) - rank(b.type)).map(({ id }) => id);
  return async () => {
    for (const pid of pids) killProcess(pid);
    await closed;
  };
}

const rank = (type: string) => (type === 'browser' ? 0 : 1);

function killProcess(pid: number): void {
  try {
    process.kill(pid, 'SIGKILL');
  } catch (error) {
    // A child may have followed its parent already.
    if ((error as NodeJS.ErrnoException).code !== 'ESRCH') throw error;
  }
}

/** One record as the tablet holds it. */
export interface HeldEntry {
  entry: Pick<Entry, 'id' | 'kind' | 'step' | 'device' | 'deviceSeq' | 'data' | 'at'>;
  where: 'outbox' | 'entries' | 'refused';
}

/** Reads what the tablet holds of a job straight from IndexedDB, past the program. */
export async function readHeld(page: Page, job: string): Promise<HeldEntry[]> {
  const rows = await page.evaluate(async () => {
    const done = <T>(request: IDBRequest<T>) =>
      new Promise<T>((resolve, reject) => {
        request.onsuccess = () => resolve(request.result);
        request.onerror = () => reject(request.error ?? new Error('IndexedDB gave no reason.'));
      });
    const db = await done(indexedDB.open('witnessmark'));
    const stores = ['outbox', 'entries', 'refused'] as const;
    const reading = db.transaction(stores, 'readonly');
    const read = await Promise.all(stores.map((name) => done(reading.objectStore(name).getAll())));
    db.close();
    return stores.flatMap((where, index) =>
      (read[index] as { job: string; entry?: unknown; recorded?: unknown }[]).map((row) => ({
        job: row.job,
        where,
        entry: row.entry ?? row.recorded,
      })),
    );
  });
  return (rows as (HeldEntry & { job: string })[]).filter((row) => row.job === job);
}
