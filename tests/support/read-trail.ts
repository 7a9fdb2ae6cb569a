import type { Entry, Recorded } from '@/domain/entry';
import type { ReadTrail } from '@/features/trail/read-trail';
import type { Journal } from './journal';

/** A journal as the trail's page reads it: each entry was recorded ten minutes after it was made. */
export function readTrailOf(
  journal: Journal,
  change: (recorded: Recorded) => Recorded = (recorded) => recorded,
): ReadTrail {
  const [first] = journal.entries;
  return {
    number: '0147',
    plans: new Map([[first?.plan ?? '', journal.plan]]),
    entries: journal.entries.map((entry, i) => ({
      recorded: change(recordedAfter(entry, i + 1)),
      hash: String(i + 1)
        .padStart(4, '0')
        .repeat(16),
    })),
    heads: [],
    bytes: new Uint8Array(),
  };
}

function recordedAfter(entry: Entry, seq: number): Recorded {
  const recordedAt = new Date(Date.parse(entry.at) + 600_000).toISOString();
  return { ...entry, seq, recordedAt, prev: '0'.repeat(64), clockOffsetMs: 0 };
}
