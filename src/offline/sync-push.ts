import { changeJob, ofJob, type FloorDatabase, type OutboxRow, type RefusedRow } from './database';
import type { Verdicts } from './sync-answer';

const MAX_ENTRIES = 200;
/** The server reads 512 kB; the list of jobs and the brackets need some of it. */
const MAX_BYTES = 480 * 1024;

/** A record to be sent: one that has no verdict yet, or one whose refusal a restored server has lost. */
export type Sendable = Pick<
  OutboxRow,
  'job' | 'id' | 'entry' | 'signature' | 'key' | 'sealed' | 'restored' | 'workshopRestoredAt'
> & {
  /** Where it is in the outbox. */
  place?: number | undefined;
  refused?: Pick<RefusedRow, 'reason'> | undefined;
};

export interface Batch {
  rows: Sendable[];
  /** There is more to send after this batch. */
  more: boolean;
}

/** The next records to send: each job's in order, none that was tried in this run or has arrived already. */
export function nextBatch(db: FloorDatabase, tried: ReadonlySet<string>): Promise<Batch> {
  return db.transaction('r', db.refused, db.outbox, () => readBatch(db, tried));
}

async function readBatch(db: FloorDatabase, tried: ReadonlySet<string>): Promise<Batch> {
  const lost = (await db.refused.toArray()).filter(({ inTrail }) => inTrail === null);
  const jobs = new Set(lost.map(({ job }) => job));
  for (const [job] of await db.outbox.toCollection().primaryKeys()) jobs.add(job);
  const rows: Sendable[] = [];
  let bytes = 0;
  for (const job of jobs) {
    const refused = lost.filter((row) => row.job === job).map(refusedBefore);
    const made = await ofJob(db.outbox, job).toArray();
    for (const row of [...refused, ...made.filter(({ where }) => where !== 'sent')]) {
      if (tried.has(row.id)) continue;
      bytes += bytesOf(row);
      if (rows.length > 0 && (rows.length === MAX_ENTRIES || bytes > MAX_BYTES)) return { rows, more: true };
      rows.push(row);
    }
  }
  return { rows, more: false };
}

/** A verdict is final: what was refused is refused again, in the words of then. */
export function refusedBefore({ job, id, entry, signature, key, reason }: RefusedRow): Sendable {
  return { job, id, entry, signature, key, refused: { reason } };
}

/** A record as the server asks for it. */
export function toWire({ refused, restored, workshopRestoredAt, ...row }: Sendable) {
  const { entry, signature, key, sealed } = row;
  return {
    ...{ entry, signature, key },
    ...(sealed ? { sealed } : {}),
    ...(refused ? { refused } : {}),
    ...(restored ? { restored } : {}),
    ...(workshopRestoredAt ? { workshopRestoredAt } : {}),
  };
}

function bytesOf(row: Sendable): number {
  return new TextEncoder().encode(JSON.stringify(toWire(row))).length + 1;
}

/**
 * Writes down what the server said of each record. What it recorded stays in the outbox until the trail
 * brings it back in its place; what it refused is kept whole with the reason.
 */
export async function applyVerdicts(
  db: FloorDatabase,
  sent: readonly Sendable[],
  verdicts: Verdicts,
  at: string,
): Promise<void> {
  if (sent.length === 0) return;
  const byId = new Map(verdicts.map((verdict) => [verdict.id, verdict]));
  await db.transaction('rw', db.outbox, db.refused, db.jobs, async () => {
    const changed = new Set<string>();
    for (const { job, place, id } of sent) {
      const verdict = byId.get(id);
      // Of what was refused before, the trail says whether it is told of again.
      if (place === undefined) continue;
      const row = await db.outbox.get([job, place]);
      if (!verdict || row?.id !== id) continue;
      if (await applyVerdict(db, row, verdict, at)) changed.add(job);
    }
    for (const job of changed) await changeJob(db, job, {});
  });
}

/** Whether it changed how the job looks. */
async function applyVerdict(
  db: FloorDatabase,
  row: OutboxRow,
  { verdict, code, reason }: Verdicts[number],
  at: string,
): Promise<boolean> {
  if (verdict === 'refused') {
    const { id, job, entry, contentHash, signature, key } = row;
    await db.refused.put({
      ...{ id, job, entry, contentHash, signature, key, refusedAt: at },
      code: code ?? 'refused',
      reason: reason ?? 'The server gave no reason.',
    });
    await db.outbox.delete([row.job, row.place]);
    return true;
  }
  const where = verdict === 'waiting' ? 'waiting' : 'sent';
  if (row.where === where && row.code === code && row.reason === reason) return false;
  await db.outbox.put({ ...row, where, code, reason });
  return true;
}
