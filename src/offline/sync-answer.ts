/*
 * Reading what the server sends. A page of a trail is taken only as far as it continues, number by number
 * and hash by hash, what this tablet already has.
 */
import * as z from 'zod/mini';
import { parseEntry, type Recorded } from '@/domain/entry';
import { NO_PREVIOUS } from '@/domain/trail-hash';
import type { EntryRow, JobRow, TrailPoint } from './database';
import { chainHashOf, contentHashOf, entryOf } from './hashing';

const point = z.object({ seq: z.int(), hash: z.string() });

/** The answer to `POST /api/sync`. */
export const syncAnswer = z.object({
  at: z.string(),
  verdicts: z.array(
    z.object({
      id: z.string(),
      verdict: z.enum(['recorded', 'already recorded', 'refused', 'waiting']),
      code: z.optional(z.string()),
      reason: z.optional(z.string()),
    }),
  ),
  jobs: z.array(
    z.object({
      id: z.string(),
      entries: z.array(
        z.object({
          recorded: z.record(z.string(), z.unknown()),
          hash: z.string(),
          // The server's own entries carry no author's signature.
          signature: z.nullish(z.string()),
          key: z.nullish(z.string()),
        }),
      ),
      more: z.boolean(),
      head: z.nullish(point),
      restored: z.optional(z.boolean()),
      gone: z.optional(z.boolean()),
    }),
  ),
  workshop: z.int(),
  /** When the server was last restored from a backup. */
  restoredAt: z.nullish(z.string()),
  /** The tablet's clock minus the server's. */
  clockOffsetMs: z.optional(z.int()),
});

export type SyncAnswer = z.infer<typeof syncAnswer>;
export type Verdicts = SyncAnswer['verdicts'];
export type JobAnswer = SyncAnswer['jobs'][number];

/** What the server adds to an entry, apart from what only some entries have. */
const recordedFields = z.object({
  seq: z.int().check(z.minimum(1)),
  recordedAt: z.string(),
  prev: z.string(),
  clockOffsetMs: z.int(),
});

export interface PulledPage {
  /** The entries that continue the trail, in order. */
  rows: EntryRow[];
  /** Why the page was not taken further than that. */
  stopped?: JobRow['stopped'];
}

/** Reads one page of a job's trail that is to follow `have`. */
export function readPage(job: string, have: TrailPoint | null, page: JobAnswer['entries']): PulledPage {
  const rows: EntryRow[] = [];
  let last = have ?? { seq: 0, hash: NO_PREVIOUS };
  for (const item of page) {
    const read = readItem(job, last, item);
    if (!read.ok) return { rows, stopped: read.stopped };
    rows.push(read.row);
    last = read.row;
  }
  return { rows };
}

type ReadItem = { ok: true; row: EntryRow } | { ok: false; stopped: NonNullable<JobRow['stopped']> };

function readItem(job: string, last: TrailPoint, item: JobAnswer['entries'][number]): ReadItem {
  const recorded = item.recorded as unknown as Recorded;
  const parsed = parseEntry(entryOf(recorded));
  if (!parsed.ok && parsed.newer) return stop('newer-entry', NEWER);
  const fields = z.safeParse(recordedFields, item.recorded);
  if (!parsed.ok || !fields.success) return stop('unreadable-entry', UNREADABLE);
  const { seq, prev } = fields.data;
  const follows = seq === last.seq + 1 && prev === last.hash && recorded.job === job;
  if (!follows || hashOf(recorded) !== item.hash) return stop('chain-broken', BROKEN);
  const { id, device } = parsed.entry;
  const contentHash = contentHashOf(parsed.entry);
  const signature = item.signature ?? '';
  const key = item.key ?? '';
  return { ok: true, row: { job, seq, id, device, recorded, hash: item.hash, contentHash, signature, key } };
}

/** Undefined for what no trail could hold. */
function hashOf(recorded: Recorded): string | undefined {
  try {
    return chainHashOf(recorded);
  } catch (error) {
    if (error instanceof RangeError) return undefined;
    throw error;
  }
}

const NEWER =
  'This job holds entries made by a newer version. Update this tablet: close other tabs, then reload. What was recorded here is safe.';
const UNREADABLE =
  'The server sent an entry of this job that this tablet can’t read. What was recorded here is safe. Update this tablet; if it stays, tell the supervisor.';
const BROKEN =
  'The trail that the server sent does not continue the one on this tablet. Nothing of it was taken over and what was recorded here is safe. Tell the supervisor.';

function stop(code: string, words: string): ReadItem {
  return { ok: false, stopped: { code, words } };
}
