import { createJobStore, type JobStore } from './job-store';
import { browserSurroundings, type Surroundings } from './surroundings';
import { createSyncLoop, type SyncLoop } from './sync';

/** What the offline part is to a page. */
export interface Offline extends Surroundings {
  jobs: JobStore;
  sync: SyncLoop;
}

/** Opens the tablet's records; once a page, in the browser. `sync.start()` begins to send. */
export function openOffline(surroundings: Surroundings = browserSurroundings()): Offline {
  return {
    ...surroundings,
    jobs: createJobStore(surroundings.db),
    sync: createSyncLoop(surroundings),
  };
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
