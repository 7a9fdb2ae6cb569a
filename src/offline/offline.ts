import { createJobStore, type JobStore } from './job-store';
import { browserSurroundings, type Surroundings } from './surroundings';
import { NO_NETWORK, type Outcome } from './server-call';
import { createSyncLoop, type SyncLoop, type SyncRun } from './sync';

/** What the offline part is to a page. */
export interface Offline extends Surroundings {
  jobs: JobStore;
  sync: SyncLoop;
}

/** The surroundings, and a run of the sync where it is not to be loaded first. */
interface OpenedWith extends Surroundings {
  run?: SyncRun | undefined;
}

/** Opens the tablet's records; once a page, in the browser. `sync.start()` begins to send. */
export function openOffline(
  { run = runWhenLoaded, ...surroundings }: OpenedWith = browserSurroundings(),
): Offline {
  return {
    ...surroundings,
    jobs: createJobStore(surroundings.db),
    sync: createSyncLoop(surroundings, run),
  };
}

/** A record can be made before what sends it is there: that part of the program is loaded by the first run. */
async function runWhenLoaded(s: Surroundings): Promise<Outcome> {
  const part = await import('./sync-run').catch(() => undefined);
  return part ? part.runSync(s) : { ...NO_NETWORK };
}

let ofThisPage: Offline | undefined;

/** The records as this page holds them, opened at the first use: a desk page asks from many places. */
export function offlineOfThisPage(): Offline {
  ofThisPage ??= openOffline();
  return ofThisPage;
}

/** Stops sending and closes the records, so that nothing of this page touches them again. */
export function closeOffline(offline: Offline): void {
  offline.sync.stop();
  offline.jobs.close();
  offline.db.close();
}
