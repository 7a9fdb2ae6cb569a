/*
 * When to sync. One run at a time over all tabs; started by opening the page, by the network's return, by
 * the page coming to the front, after each record, and by a timer that backs off with jitter.
 */
import { liveQuery } from 'dexie';
import type { Outcome } from './server-call';
import { instantOf, type Surroundings } from './surroundings';
import { readSyncStatus, statusWords, type LastSync, type SyncStatus } from './sync-status';

const SECOND = 1000;
const MINUTE = 60 * SECOND;
/** With nothing wrong, others' entries are asked for this often. */
const CALM_MS = MINUTE;
const FIRST_RETRY_MS = 2 * SECOND;
const LONGEST_RETRY_MS = 5 * MINUTE;
/** Touches in quick succession go out together. */
const NUDGE_MS = 250;

/** One run over everything, as `runSync` does it. */
export type SyncRun = (s: Surroundings) => Promise<Outcome>;

export interface SyncLoop {
  /** Begins to send by itself, if asked only after a time; safe to call again. */
  start(afterMs?: number): void;
  /** Ends that; a run that has begun comes to its end. */
  stop(): void;
  /** Runs once, after any run that is under way, and tells how it went. */
  now(): Promise<Outcome>;
  /** Runs soon; for callers that don't wait. */
  nudge(): void;
  status(): SyncStatus;
  subscribe(listener: (status: SyncStatus) => void): () => void;
}

/** The sync of one tab; call `start` once the page is there. */
export function createSyncLoop(s: Surroundings, run: SyncRun): SyncLoop {
  let isStarted = false;
  let isRunning = false;
  let failures = 0;
  let cancelTimer: (() => void) | undefined;
  let lastRun: Promise<unknown> = Promise.resolve();
  let pending: Promise<Outcome> | undefined;
  let status: SyncStatus = { ...NOTHING_KNOWN };
  let stopWatching: (() => void) | undefined;
  const listeners = new Set<(status: SyncStatus) => void>();

  function show(next: Partial<SyncStatus>): void {
    const merged = { ...status, ...next, running: isRunning };
    status = { ...merged, words: statusWords(merged) };
    for (const listener of listeners) listener(status);
  }

  function now(): Promise<Outcome> {
    // A run that has not begun yet serves everybody who asks meanwhile.
    if (pending) return pending;
    const next = lastRun.then(async () => {
      pending = undefined;
      return runOnce();
    });
    pending = next;
    lastRun = next.catch(() => undefined);
    return next;
  }

  async function runOnce(): Promise<Outcome> {
    isRunning = true;
    show({});
    try {
      const outcome = await oneAtATime(s, () => run(s));
      failures = outcome.ok ? 0 : failures + 1;
      await noteRun(s, outcome);
      return outcome;
    } finally {
      isRunning = false;
      show({});
      plan(failures === 0 ? jittered(s, CALM_MS) : retryAfter(s, failures));
    }
  }

  function plan(ms: number): void {
    if (!isStarted) return;
    cancelTimer?.();
    cancelTimer = s.after(ms, runQuietly);
    show({ nextTryAt: instantOf(s.now() + ms) });
  }

  function runQuietly(): void {
    // The database itself failed: told in the status, tried again by the timer that runOnce has set.
    now().catch(() => {
      failures += 1;
      show({ trouble: STORAGE_TROUBLE });
    });
  }

  function onVisible(): void {
    if (document.visibilityState === 'visible') runQuietly();
  }

  return {
    start(afterMs = 0) {
      if (isStarted) return;
      isStarted = true;
      const watched = liveQuery(() => readSyncStatus(s)).subscribe((read) => show(read));
      stopWatching = () => watched.unsubscribe();
      window.addEventListener('online', runQuietly);
      document.addEventListener('visibilitychange', onVisible);
      if (afterMs > 0) plan(afterMs);
      else runQuietly();
    },
    stop() {
      if (!isStarted) return;
      isStarted = false;
      cancelTimer?.();
      stopWatching?.();
      window.removeEventListener('online', runQuietly);
      document.removeEventListener('visibilitychange', onVisible);
    },
    now,
    nudge: () => plan(NUDGE_MS),
    status: () => status,
    subscribe(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
  };
}

const NOTHING_KNOWN: SyncStatus = {
  onTablet: 0,
  waiting: 0,
  sent: 0,
  refused: 0,
  photos: 0,
  signInAgain: [],
  running: false,
  words: '',
};

const STORAGE_TROUBLE = {
  code: 'storage',
  words:
    'This tablet could not read its own records. Reload the page; if that does not help, do not clear the browser: tell the supervisor.',
};

/** Between half and one and a half times the time given, so that tablets don't all come back at once. */
function jittered({ random }: Surroundings, ms: number): number {
  return Math.round(ms * (0.5 + random()));
}

function retryAfter(s: Surroundings, failures: number): number {
  return jittered(s, Math.min(FIRST_RETRY_MS * 2 ** (failures - 1), LONGEST_RETRY_MS));
}

/**
 * One run at a time over all tabs. Without Web Locks each tab runs for itself: slower, but every write
 * checks that what it stands on is still so.
 */
async function oneAtATime(s: Surroundings, run: () => Promise<Outcome>): Promise<Outcome> {
  return s.locks ? s.locks.request('witnessmark-sync', run) : run();
}

async function noteRun(s: Surroundings, outcome: Outcome): Promise<void> {
  const at = instantOf(s.now());
  await s.db.transaction('rw', s.db.meta, async () => {
    const before = (await s.db.meta.get('sync'))?.value as LastSync | undefined;
    const value: LastSync = outcome.ok
      ? { syncedAt: at, triedAt: at }
      : { syncedAt: before?.syncedAt, triedAt: at, trouble: { code: outcome.code, words: outcome.why } };
    await s.db.meta.put({ key: 'sync', value });
  });
}
