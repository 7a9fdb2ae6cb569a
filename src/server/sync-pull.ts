import type { Db } from './database';
import type { Device } from './devices';
import { selectVisibleJobs } from './job-access';
import type { SyncBody } from './sync-body';

/** How many entries one answer brings at most, of one job and of all; the rest comes with the next. */
const ENTRIES_OF_ONE = 500;
const ENTRIES_OF_ALL = 1000;

export interface TrailRow {
  seq: number;
  /** The recorded entry, canonical JSON, exactly as it was hashed. */
  body: string;
  hash: string;
  signature: string | null;
  key: string | null;
}

export interface PulledJob {
  id: string;
  entries: TrailRow[];
  more: boolean;
  head: { seq: number; hash: string } | null;
  /** The server does not hold what the tablet holds: it was restored from a backup. */
  restored?: true;
  /** Not there, or nothing that this tablet may see. */
  gone?: true;
}

/** What each of these jobs has after the entry that the tablet holds. */
export async function pullJobs(db: Db, device: Device, wanted: SyncBody['jobs']): Promise<PulledJob[]> {
  const jobs: PulledJob[] = [];
  let room = ENTRIES_OF_ALL;
  for (const { id, have } of wanted) {
    const job = (await maySee(db, device, id))
      ? await pullJob(db, id, have, Math.min(room, ENTRIES_OF_ONE))
      : ({ id, entries: [], more: false, head: null, gone: true } as const);
    room -= job.entries.length;
    jobs.push({ ...job, entries: [...job.entries] });
  }
  return jobs;
}

/** A trail after an entry, in order. */
export function listTrailRows(
  db: Db,
  job: string,
  { after, limit }: { after: number; limit: number },
): Promise<TrailRow[]> {
  return db
    .selectFrom('job_entry')
    .select(['seq', 'body', 'hash', 'signature', 'key_id as key'])
    .where('job_id', '=', job)
    .where('seq', '>', after)
    .orderBy('seq')
    .limit(limit)
    .execute();
}

async function pullJob(
  db: Db,
  id: string,
  have: { seq: number; hash: string } | null,
  limit: number,
): Promise<PulledJob> {
  const head = await findHead(db, id);
  const isHeld = have === null || (await findHash(db, id, have.seq)) === have.hash;
  const after = isHeld ? (have?.seq ?? 0) : 0;
  const entries = limit > 0 && (head?.seq ?? 0) > after ? await listTrailRows(db, id, { after, limit }) : [];
  const last = entries.at(-1)?.seq ?? after;
  return {
    id,
    entries,
    more: last < (head?.seq ?? 0),
    head: head ?? null,
    ...(isHeld ? {} : { restored: true as const }),
  };
}

/** A tablet holds open jobs, and those in which it has a part; closed ones of others are not for it. */
export async function maySee(db: Db, device: Device, id: string): Promise<boolean> {
  const job = await selectVisibleJobs(db, device).where('job.id', '=', id).executeTakeFirst();
  return job !== undefined;
}

function findHead(db: Db, id: string): Promise<{ seq: number; hash: string } | undefined> {
  return db
    .selectFrom('job_entry')
    .select(['seq', 'hash'])
    .where('job_id', '=', id)
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
}

async function findHash(db: Db, id: string, seq: number): Promise<string | undefined> {
  const row = await db
    .selectFrom('job_entry')
    .select('hash')
    .where('job_id', '=', id)
    .where('seq', '=', seq)
    .executeTakeFirst();
  return row?.hash;
}

/** The answer to a push as text: recorded entries go out exactly as they were hashed, without being read. */
export function syncAnswerJson({ jobs, ...rest }: { jobs: readonly PulledJob[] }): string {
  const texts = jobs.map(({ entries, ...job }) => {
    const open = JSON.stringify(job).slice(0, -1);
    return `${open},"entries":[${entries.map(rowJson).join(',')}]}`;
  });
  return `${JSON.stringify(rest).slice(0, -1)},"jobs":[${texts.join(',')}]}`;
}

function rowJson({ body, hash, signature, key }: TrailRow): string {
  return `{"recorded":${body},"hash":"${hash}","signature":${JSON.stringify(signature)},"key":${JSON.stringify(key)}}`;
}
