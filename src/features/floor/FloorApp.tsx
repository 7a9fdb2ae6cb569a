import { lazy, Suspense, useEffect, useState, useSyncExternalStore } from 'react';
import { openOffline, type Offline } from '@/offline/offline';
import { askToPersist } from '@/offline/persistence';
import { makeAvailableOffline } from '@/offline/prefetch';
import { refreshSignedIn } from '@/offline/tablet';
import { FloorContext, useFloor, useFloorStore } from './floor-context';
import { createFloorStore, type FloorStore } from './floor-store';
import { Opening } from './Opening';
import { RunScreen } from './RunScreen';
import { bringWork } from './sign-in';
import { keepRegistration } from './use-update';

// Not needed where the address names a job, and there the first action counts.
const StartScreen = lazy(() => import('./StartScreen').then((m) => ({ default: m.StartScreen })));

const WORKER = '/sw.js';
/** The service worker fetches everything anew where there is a new version: the first action goes before. */
const WORKER_AFTER_MS = 2000;
/** A run of the sync loads what it needs: before that, too. */
const SYNC_AFTER_MS = 1000;

/** The Floor: one page that reads everything from this tablet, so that it opens with no network. */
export function FloorApp() {
  const [store] = useState(() => createFloorStore(openOffline()));
  useEffect(() => startFloor(store), [store]);
  return (
    <FloorContext value={store}>
      <Floor />
    </FloorContext>
  );
}

function Floor() {
  const job = useSyncExternalStore(watchAddress, jobInAddress, () => null);
  const store = useFloorStore();
  const isReady = useFloor((floor) => floor.isReady);
  const jobId = useFloor((floor) => floor.jobId);
  const isHere = useFloor(({ jobs }) =>
    jobs.some(({ id, availableOffline }) => id === job && availableOffline),
  );
  useEffect(() => {
    if (!isReady) return;
    const { openJob, leaveJob, offline } = store.getState();
    if (job === null) leaveJob();
    else void bringAndOpen(offline, job, openJob);
  }, [store, job, isReady]);
  if (job !== null && jobId === job) return <RunScreen />;
  // What is on the tablet opens in a moment; the jobs stand there only while one is brought over the network.
  if (job !== null && (isHere || !isReady)) return <Opening />;
  return (
    <Suspense fallback={null}>
      <StartScreen />
    </Suspense>
  );
}

/** A job that is not here yet is fetched first where there is a network; its absence is told by the run screen. */
async function bringAndOpen(
  offline: Offline,
  job: string,
  openJob: (job: string) => Promise<void>,
): Promise<void> {
  const row = await offline.db.jobs.get(job);
  if (row?.availableOffline !== true) await makeAvailableOffline(offline, job);
  await openJob(job);
}

/** Begins what lasts as long as the page: reading, sending, and the service worker. */
function startFloor(store: FloorStore): () => void {
  const { offline, reload } = store.getState();
  const stopSync = offline.sync.subscribe((sync) => store.setState({ sync }));
  offline.sync.start(SYNC_AFTER_MS);
  void reload().then(() => catchUp(store));
  const cancelWorker = offline.after(WORKER_AFTER_MS, () => {
    keepWorker().catch(() => {
      // Without a service worker (no HTTPS, a private window) the Floor works as long as the page stays open.
      keepRegistration(undefined);
    });
  });
  void askToPersist();
  return () => {
    cancelWorker();
    stopSync();
    offline.sync.stop();
  };
}

async function keepWorker(): Promise<void> {
  const { registerWorker } = await import('@/offline/registration');
  keepRegistration(await registerWorker(WORKER));
}

/** What the server knows newer than this tablet; with no network nothing changes. */
async function catchUp(store: FloorStore): Promise<void> {
  const { offline, working, signedIn, tablet, reload } = store.getState();
  if (signedIn.length === 0 && tablet?.enrolled !== true) return;
  await refreshSignedIn(offline);
  await bringWork(offline, working);
  await reload();
}

function jobInAddress(): string | null {
  const inHash = new URLSearchParams(location.hash.slice(1)).get('job');
  return inHash ?? new URLSearchParams(location.search).get('job');
}

function watchAddress(listener: () => void): () => void {
  addEventListener('hashchange', listener);
  return () => removeEventListener('hashchange', listener);
}
