import type { Entry, EntryOf } from '@/domain/entry';
import { evidenceFor } from '@/domain/job';
import { evidenceDigest } from '@/domain/job-evidence';
import type { JobState, Verdict } from '@/domain/job-state';
import { whyNotDigest, whyNotWorkSigned } from '@/domain/job-work';
import { stamp } from './clock';
import type { App } from './compose';
import type { Trx } from './database';
import { sha256Hex } from './crypto';
import { AppError } from './errors';
import { type JobFold, UNHEARD } from './job-fold';
import { findLost } from './lost-tablets';
import { checkPin } from './pins';
import { openSealed } from './sealing';
import type { Batch, PinResult, ProvedItem } from './sync-batch';

/*
 * A signature binds to exactly the evidence that its signer was shown. The server waits until it holds all of
 * that, works the digest out anew, and only then tries the PIN, so that no attempt is spent on a signature that
 * could not stand anyway.
 */

/** What says up to which numbers it covers the records of each tablet. */
type Covering = EntryOf<'signed'> | EntryOf<'work-signed'>;

/** Why a signature has to wait: something that it covers has not come in yet and may still come. */
export async function whyWaitForEvidence(
  batch: Batch,
  fold: JobFold,
  entry: Entry,
): Promise<string | undefined> {
  if (entry.kind !== 'signed' && entry.kind !== 'work-signed') return undefined;
  const missing = notHeard(fold, entry);
  const states = await readStates(
    batch.trx,
    missing.map(([device]) => device),
  );
  // A tablet's own earlier numbers are there before this is judged, and one that nobody knows sends nothing.
  const mayCome = (device: string): boolean =>
    entry.kind === 'signed'
      ? states.get(device) !== 'lost'
      : device !== entry.device && states.get(device) === 'active';
  const awaited = missing.find(([device]) => mayCome(device));
  if (awaited === undefined) return undefined;
  return `The signature covers records of a tablet up to number ${awaited[1]} that have not come in yet. It waits for them.`;
}

async function readStates(trx: Trx, devices: readonly string[]): Promise<ReadonlyMap<string, string>> {
  if (devices.length === 0) return new Map();
  const rows = await trx.selectFrom('device').select(['id', 'state']).where('id', 'in', devices).execute();
  return new Map(rows.map(({ id, state }) => [id, state]));
}

/** The tablets whose records a signature reaches further than they were heard, with the number that it reaches. */
function notHeard(fold: JobFold, { data }: Covering): [device: string, number: number][] {
  return Object.entries(data.covers.upTo).filter(
    ([device, number]) => (fold.heard.get(device) ?? UNHEARD).number < number,
  );
}

/** Why a signature can't stand whose evidence was on a tablet that is lost. */
export async function whyLost(batch: Batch, fold: JobFold, entry: Covering): Promise<string | undefined> {
  const missing = notHeard(fold, entry);
  const lost = await findLost(
    batch.trx,
    missing.map(([device]) => device),
  );
  const first = missing.find(([device]) => entry.kind === 'signed' || lost.has(device));
  if (first === undefined) return undefined;
  const [device, number] = first;
  const name = lost.get(device) ?? 'a tablet';
  const from = (fold.heard.get(device) ?? UNHEARD).number + 1;
  const which = from === number ? `record ${from}` : `records ${from} to ${number}`;
  return `It covers ${which} of ${name}, which was declared lost: they never came. Look at what there is, have done again what is missing, and sign again.`;
}

/** Why a signature does not cover what the server holds as evidence for its hold point. */
export async function whyNotCovered(
  batch: Batch,
  fold: JobFold,
  entry: EntryOf<'signed'>,
): Promise<string | undefined> {
  const lost = await whyLost(batch, fold, entry);
  if (lost !== undefined) return lost;
  const { covers } = entry.data;
  const evidence = evidenceFor(fold.state, entry.step ?? '');
  const outside = evidence.filter(({ device, deviceSeq }) => deviceSeq > (covers.upTo[device] ?? 0));
  if (outside.length > 0) {
    const words = outside.length === 1 ? 'one record was' : `${outside.length} records were`;
    return `The evidence changed since you saw it: ${words} added. Look at it again and sign again.`;
  }
  const hashes = await contentHashes(batch, fold.job);
  const covered = evidence.flatMap(({ id }) => hashes.get(id) ?? []);
  if (covered.length === covers.count && evidenceDigest(covered, sha256Hex) === covers.digest)
    return undefined;
  return 'The evidence changed since you saw it: something that you saw was refused or is not the same. Look at it again and sign again.';
}

/**
 * A signature for one's own work is judged on what its author saw. If that was on another tablet whose records came
 * since, it is judged on what there is now: only who knew them has their digest.
 */
export async function whyNotWork(
  batch: Batch,
  fold: JobFold,
  entry: EntryOf<'work-signed'>,
  view: JobState,
): Promise<Verdict> {
  const seen = whyNotWorkSigned(view, entry);
  const isOfOthers = !seen.ok && seen.code === 'work-to-come';
  const verdict = isOfOthers ? whyNotWorkSigned(fold.state, entry) : seen;
  if (!verdict.ok) return verdict;
  const hashes = await contentHashes(batch, fold.job);
  return whyNotDigest(isOfOthers ? fold.state : view, entry, { hashes, sha256: sha256Hex });
}

async function contentHashes(batch: Batch, job: string): Promise<ReadonlyMap<string, string>> {
  const stored = await batch.trx
    .selectFrom('job_entry')
    .select(['id', 'content_hash'])
    .where('job_id', '=', job)
    .execute();
  const added = batch.newEntries.filter((row) => row.job_id === job);
  return new Map([...stored, ...added].map((row) => [row.id, row.content_hash]));
}

/** Opens the PIN that was sealed to an entry and tries it; never inside a transaction. */
export async function tryPin(app: App, item: ProvedItem): Promise<PinResult> {
  const sealed = item.carried?.sealed;
  if (sealed === undefined) throw new RangeError('This entry carries no PIN.');
  const { entry } = item;
  const digest = entry.kind === 'signed' ? entry.data.covers.digest : item.contentHash;
  let pin: string;
  try {
    pin = await openSealed(app.keys, sealed, `${entry.id}.${digest}`);
  } catch (error) {
    if (error instanceof AppError) return { result: 'unreadable' };
    throw error;
  }
  const purpose = entry.kind === 'signed' ? `hold point ${entry.data.holdPoint}` : entry.kind;
  const checked = await checkPin(app, entry.by, pin, { purpose, deviceId: entry.device });
  switch (checked.result) {
    case 'right':
      return { result: 'right', keyId: sealed.keyId, checkedAt: stamp(app.clock) };
    case 'wrong':
      return { result: 'wrong' };
    case 'locked':
      return { result: 'locked', until: checked.until };
    case 'none set':
      return { result: 'none set' };
  }
}
