import type { Entry, EntryData, Recorded, RecordedFields } from '@/domain/entry';
import type { JobState } from '@/domain/job-state';
import { beginFolding, endFolding } from '@/domain/job-tables';
import type { NewJobEntryRow, RefusedEntryTable } from '@db/tables';
import type { Insertable } from 'kysely';
import type { App } from './compose';
import { sha256Hex } from './crypto';
import type { Trx } from './database';
import type { Device } from './devices';
import { findFold, foldNext, type JobFold, noteRefusal, SERVER_DEVICE, UNHEARD } from './job-fold';
import { type CanonicalField, canonicalFields, canonicalText, canonicalTextWith } from './recorded-text';
import type { EntryVerdict } from './sync-body';
import {
  type KeyRow,
  type Known,
  type KnownRefusal,
  readKeys,
  readRecorded,
  readRefused,
} from './sync-known';
import type { ReadItem } from './sync-read';
import type { WorkshopHistory } from './workshop-history';

/*
 * One push in one transaction. Entries are judged against states held here, and their rows are written
 * together; nothing of it is remembered anywhere else before the transaction is committed.
 */

/** What came of trying the PIN that was sealed to an entry. */
export type PinResult =
  | { result: 'right'; keyId: string; checkedAt: string }
  | { result: 'wrong' | 'unreadable' | 'none set' }
  | { result: 'locked'; until: string };

/** The job as a tablet saw it. */
export interface TabletView {
  state: JobState;
  /** The last number of the tablet's own that is in it. */
  number: number;
}

/** An entry whose author and place in its tablet's order are proved. */
export interface ProvedItem extends ReadItem {
  entry: Entry;
  fields: readonly CanonicalField[];
  signature: string;
  key: KeyRow;
  /** The number was used before by another entry: this tablet was copied or restored. */
  isNumberReused: boolean;
  /** Its tablet was declared lost, and later numbers of it were taken before it came. */
  isLate: boolean;
}

export interface Batch {
  app: App;
  trx: Trx;
  history: WorkshopHistory;
  /** The tablet that pushes, or whose file is brought in; none when a job is opened. */
  device: Device | undefined;
  receivedAt: string;
  clockOffsetMs: number;
  /** What came with this push and is judged in it. */
  pushed: readonly ReadItem[];
  /** Jobs by id as they stand now; undefined for one that the server does not hold. */
  folds: Map<string, JobFold | undefined>;
  /** Jobs that this push added to. */
  changed: Set<string>;
  keys: ReadonlyMap<string, KeyRow>;
  /** Whether each entry's signature holds, by its place in the push, as far as it was checked beforehand. */
  proofs: ReadonlyMap<number, boolean>;
  recorded: Map<string, Known>;
  refused: Map<string, KnownRefusal[]>;
  /** Each state is copied before it is changed, so that an entry that trips a rule up leaves nothing behind. */
  isCareful: boolean;
  /** What tablets saw, by job, tablet and basis, where that is not what the server sees. */
  views: Map<string, TabletView>;
  /** What each tablet did in each job within this push, recorded or refused after it had gone on from it. */
  acts: Map<string, Entry[]>;
  /** By content hash of the entry that the PIN was sealed to. */
  pins: ReadonlyMap<string, PinResult>;
  newEntries: NewJobEntryRow[];
  newRefusals: Insertable<RefusedEntryTable>[];
  /** How many tightenings each tool did in this push. */
  toolUses: Map<string, number>;
  /** Jobs of which the tablet says in this push that it holds what a restore took back. */
  lostViews: Set<string>;
}

/** Gathers what the entries of a push are judged by. */
export async function beginBatch(
  parts: Pick<
    Batch,
    'app' | 'trx' | 'history' | 'device' | 'receivedAt' | 'clockOffsetMs' | 'pins' | 'proofs' | 'isCareful'
  >,
  items: readonly ReadItem[],
): Promise<Batch> {
  const { trx } = parts;
  const ids = unique(items.flatMap(({ id }) => (id === null ? [] : [id])));
  const keyIds = unique(items.flatMap((item) => (item.carried === undefined ? [] : [item.carried.key])));
  return {
    ...parts,
    pushed: items,
    folds: new Map(),
    changed: new Set(),
    keys: await readKeys(trx, keyIds),
    recorded: await readRecorded(trx, ids),
    refused: await readRefused(trx, ids),
    views: new Map(),
    acts: new Map(),
    newEntries: [],
    newRefusals: [],
    toolUses: new Map(),
    lostViews: new Set(),
  };
}

/** The job as it stands within this push. */
export async function foldOf(batch: Batch, jobId: string): Promise<JobFold | undefined> {
  if (batch.folds.has(jobId)) return batch.folds.get(jobId);
  const found = await findFold(batch.app.db, jobId, batch.trx);
  const fold = found && (batch.isCareful ? found : { ...found, state: beginFolding(found.state) });
  batch.folds.set(jobId, fold);
  return fold;
}

/** The jobs that this push added to, as they stand after it. */
export function changedFolds(batch: Batch): JobFold[] {
  return [...batch.changed].flatMap((job) => {
    const fold = batch.folds.get(job);
    return fold === undefined ? [] : [{ ...fold, state: endFolding(fold.state) }];
  });
}

/** Appends an entry to its job's trail. */
export function record(
  batch: Batch,
  fold: JobFold,
  item: {
    entry: Entry;
    fields: readonly CanonicalField[];
    contentHash: string;
    signature: string | null;
    key: string | null;
  },
  extra: Pick<RecordedFields, 'pin' | 'conflict'> & { clockOffsetMs: number },
): Recorded {
  const { entry } = item;
  const added: RecordedFields = {
    seq: fold.seq + 1,
    recordedAt: batch.receivedAt,
    prev: fold.hash,
    clockOffsetMs: extra.clockOffsetMs,
    ...(extra.pin === undefined ? {} : { pin: extra.pin }),
    ...(extra.conflict === undefined ? {} : { conflict: extra.conflict }),
  };
  const recorded: Recorded = { ...entry, ...added };
  const body = canonicalTextWith(item.fields, added);
  const hash = sha256Hex(body);
  const isServers = entry.device === SERVER_DEVICE;
  // First what may fail: nothing of an entry is kept unless all of it is.
  const next = foldNext(fold, recorded, hash);
  batch.newEntries.push({
    job_id: fold.job,
    seq: recorded.seq,
    id: entry.id,
    kind: entry.kind,
    step: entry.step ?? null,
    by_person: isServers ? null : entry.by,
    device_id: isServers ? null : entry.device,
    device_seq: entry.deviceSeq,
    at: entry.at,
    recorded_at: recorded.recordedAt,
    body,
    content_hash: item.contentHash,
    hash,
    signature: item.signature,
    key_id: item.key,
  });
  batch.recorded.set(entry.id, { contentHash: item.contentHash, seq: recorded.seq, hash });
  batch.folds.set(fold.job, next);
  batch.changed.add(fold.job);
  return recorded;
}

type ServersOwn =
  | { id: string; kind: 'refused'; data: EntryData<'refused'> }
  | { id: string; kind: 'restored'; data: EntryData<'restored'> }
  | { id: string; kind: 'tablet-lost'; data: EntryData<'tablet-lost'> }
  | { id: string; kind: 'erased'; data: EntryData<'erased'> };

/** An entry that the server makes for the record itself. */
export function recordByServer(batch: Batch, fold: JobFold, made: ServersOwn): Recorded {
  const entry = {
    v: 1,
    id: made.id,
    job: fold.job,
    plan: fold.planHash,
    basis: fold.seq,
    workshop: batch.history.seq,
    kind: made.kind,
    by: 'workshop',
    author: { name: 'Workshop', roles: [] },
    with: [],
    device: SERVER_DEVICE,
    deviceSeq: (fold.heard.get(SERVER_DEVICE) ?? UNHEARD).number + 1,
    at: batch.receivedAt,
    data: made.data,
  } as Entry;
  const fields = canonicalFields(entry);
  const contentHash = sha256Hex(canonicalText(fields));
  return record(
    batch,
    fold,
    { entry, fields, contentHash, signature: null, key: null },
    { clockOffsetMs: 0 },
  );
}

export interface Refusal {
  code: string;
  reason: string;
  /** The tablet whose number it used up; none if nothing proves that it came from there. */
  device?: string | undefined;
}

/** Sets an entry aside, whole and with the reason, and lets the job's trail tell of it. */
export async function refuse(batch: Batch, item: ReadItem, refusal: Refusal): Promise<EntryVerdict> {
  const { code } = refusal;
  const reason = hashable(refusal.reason);
  const fold = item.job === null ? undefined : await foldOf(batch, item.job);
  const id = batch.app.ids.next();
  const number = refusal.device === undefined ? null : item.deviceSeq;
  batch.newRefusals.push({
    id,
    entry_id: item.id,
    job_id: fold?.job ?? null,
    device_id: refusal.device ?? null,
    device_seq: number,
    content_hash: item.contentHash,
    body: item.text(),
    code,
    message: reason,
    at: batch.receivedAt,
    by_person: item.by,
  });
  if (item.id !== null) {
    const known = batch.refused.get(item.id) ?? [];
    batch.refused.set(item.id, [...known, { contentHash: item.contentHash, code, reason }]);
  }
  if (fold !== undefined) {
    const author = item.by === null ? {} : { author: item.by };
    const data = { content: item.contentHash, code, reason, ...author };
    const { seq } = recordByServer(batch, fold, { id, kind: 'refused', data });
    const after = batch.folds.get(fold.job);
    if (refusal.device !== undefined && after !== undefined) {
      batch.folds.set(fold.job, noteRefusal(after, refusal.device, number ?? undefined, seq));
    }
  }
  return { id: item.id ?? '', verdict: 'refused', code, reason };
}

/** A reason may quote what came in; what enters the trail has to be hashable text. */
function hashable(reason: string): string {
  return reason
    .replace(/\p{Surrogate}/gu, '?')
    .slice(0, 1000)
    .replace(/\p{Surrogate}/gu, '')
    .normalize('NFC');
}

/** Writes the rows of the push; call it before anything reads the tables, and at the end. */
export async function flush(batch: Batch): Promise<void> {
  for (const rows of inParts(batch.newEntries.splice(0), 200)) {
    await batch.trx.insertInto('job_entry').values(rows).execute();
  }
  for (const rows of inParts(batch.newRefusals.splice(0), 200)) {
    await batch.trx.insertInto('refused_entry').values(rows).execute();
  }
  for (const [tool, uses] of batch.toolUses) {
    await batch.trx
      .updateTable('tool')
      .set(({ eb }) => ({ cycles_used: eb('cycles_used', '+', uses) }))
      .where('id', '=', tool)
      .execute();
  }
  batch.toolUses.clear();
}

function unique(values: readonly string[]): string[] {
  return [...new Set(values)];
}

function inParts<T>(rows: readonly T[], size: number): T[][] {
  const parts: T[][] = [];
  for (let start = 0; start < rows.length; start += size) parts.push(rows.slice(start, start + size));
  return parts;
}
