import type { Entry } from '@/domain/entry';
import { proveSignature } from './author-signature';
import { stamp } from './clock';
import type { App } from './compose';
import type { Db, Trx } from './database';
import { type Device, noteHeardFrom } from './devices';
import { signDueHeads } from './due-heads';
import { AppError } from './errors';
import { findFold, type JobFold, rememberFolds, storeFolds, UNHEARD } from './job-fold';
import { closeStates } from './job-rows';
import { tryPin } from './signing';
import {
  type Batch,
  beginBatch,
  changedFolds,
  flush,
  foldOf,
  type PinResult,
  recordByServer,
} from './sync-batch';
import type { EntryVerdict, SyncBody } from './sync-body';
import { maySee, pullJobs, type PulledJob } from './sync-pull';
import { readKeys } from './sync-known';
import { makeUpLost } from './lost-workshop';
import { type ReadItem, readItem } from './sync-read';
import { restoresMet } from './sync-restored';
import { judgeItem, type NeedsPin } from './sync-verdict';
import { readWorkshopHistory, type WorkshopHistory } from './workshop-history';

/*
 * One round trip of a tablet: what it recorded goes in, what others recorded comes back. Every entry gets its
 * own verdict, and none is given before the transaction that it rests on is on disk.
 */

export interface SyncResult {
  at: string;
  verdicts: EntryVerdict[];
  jobs: PulledJob[];
  workshop: number;
  restoredAt: string | null;
  clockOffsetMs: number;
}

/** Verdicts that entries further on in the same push may still change. */
const RETRIED = ['earlier-missing', 'evidence-missing'];

/** Takes what a tablet pushes and gives what it lacks. */
export async function syncTablet(app: App, device: Device, body: SyncBody): Promise<SyncResult> {
  if (body.device !== device.id) {
    throw new AppError('invalid-field', 'The tablet that pushes is not the one that it says it is.', {
      field: 'device',
    });
  }
  const received = app.clock.now();
  const clockOffsetMs = Date.parse(body.sentAt) - received.getTime();
  const { verdicts, ended } = await judgePush(app, {
    device,
    entries: body.entries,
    clockOffsetMs,
    begin: (trx) => noteHeardFrom(trx, device.id, app.clock),
    beforeAll: (batch, isFirstRound) => noteRestores(batch, body, isFirstRound),
    atEnd: ({ trx, history }) => pull(trx, device, body, history),
  });
  return { at: received.toISOString(), verdicts, ...ended, clockOffsetMs };
}

/** Entries of a tablet however they came, and what else is to be done in the transactions that judge them. */
export interface Push<T> {
  device: Device;
  entries: readonly unknown[];
  /** The tablet's clock minus the server's. */
  clockOffsetMs: number;
  /** Writes something, so that each transaction holds the write lock from its beginning. */
  begin: (trx: Trx) => Promise<void>;
  beforeAll?: ((batch: Batch, isFirstRound: boolean) => Promise<void>) | undefined;
  /** In each transaction that recorded or refused something, after that: how many entries of each. */
  onKept?: ((batch: Batch, kept: { recorded: number; refused: number }) => Promise<void>) | undefined;
  /** In the last transaction, after all else. */
  atEnd: (batch: Batch) => Promise<T>;
}

/** Judges entries; the verdicts are in the order of the entries. */
export async function judgePush<T>(
  app: App,
  push: Push<T>,
): Promise<{ verdicts: EntryVerdict[]; items: ReadItem[]; ended: T }> {
  const items = push.entries.map(readItem);
  const verdicts = new Map<number, EntryVerdict>();
  const pins = new Map<string, PinResult>();
  const proofs = await proveSignatures(app.db, items);
  await makeUpLost(app, push.device.id, newestNamed(items, proofs));
  let isCareful = false;
  for (;;) {
    try {
      const round = await oneRound(app, push, { items, verdicts, pins, proofs, isCareful });
      if (!('needsPin' in round)) {
        const inOrder = items.map(({ index, id }) => verdicts.get(index) ?? unexpected(id));
        return { verdicts: inOrder, items, ended: round.ended };
      }
      pins.set(round.needsPin.contentHash, await tryPin(app, round.needsPin));
    } catch (error) {
      if (!(error instanceof TrippedError)) throw error;
      isCareful = true;
    }
  }
}

/** The newest workshop entry that an entry of a known author names. */
function newestNamed(items: readonly ReadItem[], proofs: ReadonlyMap<number, boolean>): number {
  return items.reduce(
    (newest, { index, read }) =>
      read.ok && proofs.get(index) === true ? Math.max(newest, read.entry.workshop) : newest,
    0,
  );
}

interface Pulled {
  jobs: PulledJob[];
  workshop: number;
  restoredAt: string | null;
}

/** An entry tripped a rule up while states were changed in place: nothing is kept, and all is judged again. */
class TrippedError extends Error {
  override name = 'TrippedError';
}

interface Round {
  items: readonly ReadItem[];
  /** Verdicts of earlier rounds, which are final; this round adds its own once it is committed. */
  verdicts: Map<number, EntryVerdict>;
  pins: ReadonlyMap<string, PinResult>;
  proofs: ReadonlyMap<number, boolean>;
  isCareful: boolean;
}

/** Checks signatures side by side and before anything is locked: it is the longest part of a push. */
async function proveSignatures(db: Db, items: readonly ReadItem[]): Promise<ReadonlyMap<number, boolean>> {
  const ids = [...new Set(items.flatMap(({ carried }) => carried?.key ?? []))];
  const keys = await readKeys(db, ids);
  const proofs = await Promise.all(
    items.map(async ({ index, carried, contentHash }) => {
      const key = carried === undefined ? undefined : keys.get(carried.key);
      if (carried === undefined || key === undefined) return undefined;
      return [index, await proveSignature(key.publicKey, contentHash, carried.signature)] as const;
    }),
  );
  return new Map(proofs.filter((proof) => proof !== undefined));
}

/** One transaction: as far as the next PIN that has to be tried, or to the end. */
async function oneRound<T>(
  app: App,
  push: Push<T>,
  { items, verdicts, ...judgedBy }: Round,
): Promise<NeedsPin | { ended: T }> {
  // The history is remembered by the database, and read by the transaction alone.
  const { db: memory } = app;
  const { device, clockOffsetMs } = push;
  const { found, folds, result } = await app.db.transaction().execute(async (trx) => {
    await push.begin(trx);
    const history = await readWorkshopHistory(memory, trx);
    const rest = items.filter(({ index }) => !verdicts.has(index));
    const receivedAt = stamp(app.clock);
    const batch = await beginBatch(
      { app, trx, history, device, receivedAt, clockOffsetMs, ...judgedBy },
      rest,
    );
    await push.beforeAll?.(batch, verdicts.size === 0);
    const refusedBefore = new Set([...batch.refused.values()].flat().map(({ contentHash }) => contentHash));
    const judged = await judgeAll(batch, rest);
    await flush(batch);
    const changed = changedFolds(batch);
    await closeStates(trx, changed);
    await storeFolds(trx, changed);
    const kept = countKept(rest, judged.verdicts, refusedBefore);
    if (kept.recorded + kept.refused > 0) await push.onKept?.(batch, kept);
    const ended = judged.needsPin ?? { ended: await push.atEnd(batch) };
    return { found: judged.verdicts, folds: changed, result: ended };
  });
  rememberFolds(app.db, folds);
  await signDueHeads(
    app,
    folds.map(({ job }) => job),
  );
  for (const [index, verdict] of found) verdicts.set(index, verdict);
  return result;
}

/** How many entries are newly recorded, and newly refused: what was known before is answered and not kept again. */
function countKept(
  items: readonly ReadItem[],
  verdicts: ReadonlyMap<number, EntryVerdict>,
  refusedBefore: ReadonlySet<string | null>,
): { recorded: number; refused: number } {
  const judged = items.map(({ index, contentHash }) => ({
    contentHash,
    verdict: verdicts.get(index)?.verdict,
  }));
  return {
    recorded: judged.filter(({ verdict }) => verdict === 'recorded').length,
    refused: judged.filter(
      ({ verdict, contentHash }) => verdict === 'refused' && !refusedBefore.has(contentHash),
    ).length,
  };
}

async function pull(
  trx: Trx,
  device: Device,
  body: SyncBody,
  { restoredAt }: WorkshopHistory,
): Promise<Pulled> {
  const jobs = await pullJobs(trx, device, body.jobs);
  const last = await trx
    .selectFrom('workshop_entry')
    .select('seq')
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
  return { jobs, workshop: last?.seq ?? 0, restoredAt };
}

/** Judges entries in the order in which they came; those that wait are tried again when others went in. */
async function judgeAll(
  batch: Batch,
  items: readonly ReadItem[],
): Promise<{ verdicts: Map<number, EntryVerdict>; needsPin?: NeedsPin }> {
  const verdicts = new Map<number, EntryVerdict>();
  let pending = items;
  for (let isProgress = true; isProgress;) {
    isProgress = false;
    const waiting: ReadItem[] = [];
    for (const item of pending) {
      const verdict = await judgeSafely(batch, item);
      if ('needsPin' in verdict) {
        for (const { index } of items) if (isRetried(verdicts.get(index))) verdicts.delete(index);
        return { verdicts, needsPin: verdict };
      }
      verdicts.set(item.index, verdict);
      if (isRetried(verdict)) waiting.push(item);
      else isProgress = true;
    }
    pending = waiting;
    if (waiting.length === 0) break;
  }
  return { verdicts };
}

function isRetried(verdict: EntryVerdict | undefined): boolean {
  return verdict?.verdict === 'waiting' && RETRIED.includes(verdict.code ?? '');
}

/** One record that trips a rule up never fails the others; it waits, and the owner's log has the reason. */
async function judgeSafely(batch: Batch, item: ReadItem): Promise<EntryVerdict | NeedsPin> {
  let verdict: EntryVerdict | NeedsPin;
  try {
    verdict = await judgeItem(batch, item);
  } catch (error) {
    if (isDatabaseError(error)) throw error;
    if (!batch.isCareful) throw new TrippedError('An entry could not be judged', { cause: error });
    batch.app.log.error({ err: error, entry: item.id, job: item.job }, 'An entry could not be judged');
    return unexpected(item.id);
  }
  if (!('needsPin' in verdict) && verdict.verdict === 'recorded' && item.read.ok) {
    await followPlan(batch, item.read.entry);
  }
  return verdict;
}

/** A job that moved to another plan is folded anew, each entry under the plan that was in force when it came. */
async function followPlan(batch: Batch, entry: Entry): Promise<void> {
  if (entry.kind !== 'plan-moved') return;
  await flush(batch);
  await batch.trx.updateTable('job').set({ plan_hash: entry.data.to }).where('id', '=', entry.job).execute();
  batch.folds.set(entry.job, await findFold(batch.app.db, entry.job, batch.trx));
  batch.views.clear();
}

function isDatabaseError(error: unknown): boolean {
  return error instanceof Error && 'code' in error && String(error.code).startsWith('SQLITE');
}

function unexpected(id: string | null): EntryVerdict {
  return {
    id: id ?? '',
    verdict: 'waiting',
    code: 'unexpected',
    reason:
      'The server could not judge this record. It stays on the tablet and is sent again; tell the owner if it stays.',
  };
}

/** A tablet that holds what the server does not: the server was restored from a backup, and says so once. */
async function noteRestores(batch: Batch, body: SyncBody, isFirstRound: boolean): Promise<void> {
  const { device, trx } = batch;
  if (device === undefined) return;
  for (const { id, have } of body.jobs) {
    if (have === null) continue;
    const fold = await foldOf(batch, id);
    if (fold === undefined || (await holds(trx, id, have))) continue;
    // A job that the tablet may not see tells it nothing, and keeps no trace of its asking.
    batch.lostViews.add(id);
    if (!isFirstRound || isNoted(fold, device.id) || !(await maySee(trx, device, id))) continue;
    const reason = `The tablet ${device.name} (${device.id}) holds entry ${have.seq} (${have.hash.slice(0, 16)}), and the server does not.`;
    const data = { after: fold.seq, reason };
    recordByServer(batch, fold, { id: batch.app.ids.next(), kind: 'restored', data });
  }
}

async function holds(trx: Trx, job: string, have: { seq: number; hash: string }): Promise<boolean> {
  const row = await trx
    .selectFrom('job_entry')
    .select('hash')
    .where('job_id', '=', job)
    .where('seq', '=', have.seq)
    .executeTakeFirst();
  return row?.hash === have.hash;
}

/**
 * Noted already for this tablet, and nothing of it was recorded since: whatever it says to hold, it is the same
 * restore, or a tablet that wants the trail filled.
 */
function isNoted(fold: JobFold, device: string): boolean {
  const { seq: lastOwn } = fold.heard.get(device) ?? UNHEARD;
  return restoresMet(fold, device).some((seq) => seq > lastOwn);
}
