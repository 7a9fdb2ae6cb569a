import { headMessage } from '@/domain/trail';
import { isMadeByServer } from '@/domain/trail-chain';
import type { SignedHead } from '@/domain/trail-export';
import { contentHash, contentOf, NO_PREVIOUS } from '@/domain/trail-hash';
import type { Recorded } from '@/domain/entry';
import { THE_WORKSHOP } from './actor';
import { proveSignature } from './author-signature';
import { sha256Hex } from './crypto';
import type { Db } from './database';
import { readPlans, whyNotKept, whyNotPlan } from './record-beside';
import { nodeChecks } from './trail-checks';
import { WORKSHOP_TRAIL } from './signed-heads';

/*
 * Whether the database still says what was recorded: every chain, every author's signature, every signed head, and
 * the plans and refused entries that the chains name, read from the tables alone. The triggers that refuse a change can be dropped by whoever holds the file; this
 * finds what was changed then.
 */

/** Where the record does not hold. */
export interface RecordBreak {
  /** A job's id, or "workshop". */
  trail: string;
  seq: number;
  why: string;
}

/** What was checked, and every break; the first of each trail comes first. */
export interface RecordCheck {
  jobs: number;
  entries: number;
  heads: number;
  breaks: RecordBreak[];
}

const PAGE = 500;

/** Reads and checks the whole record. */
export async function checkRecord(
  db: Db,
  workshopKeys: readonly { key: string; publicKey: string }[],
): Promise<RecordCheck> {
  const breaks: RecordBreak[] = [];
  const workshop = await checkWorkshop(db, breaks);
  const jobs = await db.selectFrom('job').select('id').orderBy('id').execute();
  const ends = new Map([[WORKSHOP_TRAIL, workshop]]);
  const plans = await readPlans(db);
  for (const { id } of jobs) ends.set(id, await checkJob(db, id, plans, breaks));
  const heads = await checkHeads(db, new Map(workshopKeys.map((one) => [one.key, one.publicKey])), breaks);
  await checkRemembered(db, ends, breaks);
  const entries = [...ends.values()].reduce((sum, count) => sum + count, 0);
  return { jobs: jobs.length, entries, heads, breaks };
}

interface Row {
  seq: number;
  body: string;
  hash: string;
}

/** Follows one chain a page at a time; gives the number of its last entry. */
async function followChain<R extends Row>(
  trail: string,
  readPage: (after: number) => Promise<R[]>,
  checkRow: (row: R, recorded: Record<string, unknown>) => Promise<string | undefined>,
  breaks: RecordBreak[],
): Promise<number> {
  let [last, prev] = [0, NO_PREVIOUS];
  for (;;) {
    const rows = await readPage(last);
    for (const row of rows) {
      const recorded = readBody(row.body);
      const why =
        (row.seq === last + 1 ? undefined : `Number ${last + 1} is missing.`) ??
        (sha256Hex(row.body) === row.hash ? undefined : 'Its content is not what its hash was made of.') ??
        (recorded?.prev === prev ? undefined : 'It does not follow the entry before it.') ??
        (recorded?.seq === row.seq ? undefined : 'Its number is not the one that it was recorded under.') ??
        (recorded === undefined ? 'It can not be read.' : await checkRow(row, recorded));
      if (why !== undefined) breaks.push({ trail, seq: row.seq, why });
      [last, prev] = [row.seq, row.hash];
    }
    if (rows.length < PAGE) return last;
  }
}

function readBody(body: string): Record<string, unknown> | undefined {
  try {
    return JSON.parse(body) as Record<string, unknown>;
  } catch (error) {
    if (error instanceof SyntaxError) return undefined;
    throw error;
  }
}

function checkWorkshop(db: Db, breaks: RecordBreak[]): Promise<number> {
  return followChain(
    WORKSHOP_TRAIL,
    (after) =>
      db
        .selectFrom('workshop_entry')
        .select(['seq', 'id', 'kind', 'by_person', 'at', 'body', 'content_hash', 'hash'])
        .where('seq', '>', after)
        .orderBy('seq')
        .limit(PAGE)
        .execute(),
    (row, recorded) => {
      const { id, kind, by, at } = recorded;
      const isRow =
        id === row.id &&
        kind === row.kind &&
        by === (row.by_person ?? THE_WORKSHOP.personId) &&
        at === row.at &&
        contentHash(contentOf(recorded as unknown as Recorded), sha256Hex) === row.content_hash;
      return Promise.resolve(isRow ? undefined : OTHER_COLUMNS);
    },
    breaks,
  );
}

const OTHER_COLUMNS = 'Its row says something else than its content.';

async function checkJob(
  db: Db,
  job: string,
  plans: ReadonlyMap<string, boolean>,
  breaks: RecordBreak[],
): Promise<number> {
  return followChain(
    job,
    (after) =>
      db
        .selectFrom('job_entry')
        .leftJoin('author_key', 'author_key.id', 'job_entry.key_id')
        .select(['job_entry.seq', 'job_entry.id', 'job_entry.kind', 'job_entry.step', 'job_entry.body'])
        .select(['job_entry.hash', 'job_entry.content_hash', 'job_entry.signature', 'author_key.public_key'])
        .select(['author_key.person_id', 'author_key.device_id', 'job_entry.device_seq'])
        .select(['job_entry.by_person', 'job_entry.device_id as made_on', 'job_entry.at', 'recorded_at'])
        .where('job_entry.job_id', '=', job)
        .where('job_entry.seq', '>', after)
        .orderBy('job_entry.seq')
        .limit(PAGE)
        .execute(),
    async (row, body) => {
      const recorded = body as unknown as Recorded;
      if (!isRowOf(row, job, recorded)) return OTHER_COLUMNS;
      const beside = whyNotPlan(plans, recorded) ?? (await whyNotKept(db, job, recorded));
      if (beside !== undefined) return beside;
      if (isMadeByServer(recorded)) return undefined;
      if (row.signature === null || row.public_key === null) return "It carries no author's signature.";
      const isAuthors = row.person_id === recorded.by && row.device_id === recorded.device;
      if (!isAuthors) return 'It is signed with the key of another person or tablet.';
      const holds = await proveSignature(row.public_key, row.content_hash, row.signature);
      return holds ? undefined : "Its author's signature does not hold.";
    },
    breaks,
  );
}

interface JobColumns {
  id: string;
  kind: string;
  step: string | null;
  by_person: string | null;
  made_on: string | null;
  device_seq: number;
  at: string;
  recorded_at: string;
  content_hash: string;
}

/** Do the columns of an entry say what its content says? */
function isRowOf(row: JobColumns, job: string, recorded: Recorded): boolean {
  const isServers = isMadeByServer(recorded);
  return (
    recorded.id === row.id &&
    recorded.job === job &&
    recorded.kind === row.kind &&
    (recorded.step ?? null) === row.step &&
    (isServers ? null : recorded.by) === row.by_person &&
    (isServers ? null : recorded.device) === row.made_on &&
    recorded.deviceSeq === row.device_seq &&
    recorded.at === row.at &&
    recorded.recordedAt === row.recorded_at &&
    contentHash(contentOf(recorded), sha256Hex) === row.content_hash
  );
}

/** Every signed head is the head of an entry that is there, and is signed by a key of the workshop. */
async function checkHeads(db: Db, keys: ReadonlyMap<string, string>, breaks: RecordBreak[]): Promise<number> {
  const { verifyEd25519 } = nodeChecks();
  const heads = await db.selectFrom('signed_head').selectAll().orderBy('trail').orderBy('seq').execute();
  for (const { trail, seq, hash, at, key, signature } of heads) {
    const publicKey = keys.get(key);
    const row = await findHash(db, trail, seq);
    const why =
      (publicKey === undefined ? 'Its head is signed with an unknown key.' : undefined) ??
      (row === hash ? undefined : 'Its head was signed over another entry.') ??
      ((await verifyEd25519(
        new Uint8Array(Buffer.from(publicKey ?? '', 'base64url')),
        headMessage({ trail, seq, hash, at, key }),
        new Uint8Array(Buffer.from(signature, 'base64url')),
      ))
        ? undefined
        : 'The signature of its head does not hold.');
    if (why !== undefined) breaks.push({ trail, seq, why });
  }
  return heads.length;
}

async function findHash(db: Db, trail: string, seq: number): Promise<string | undefined> {
  const query =
    trail === WORKSHOP_TRAIL
      ? db.selectFrom('workshop_entry').select('hash').where('seq', '=', seq)
      : db.selectFrom('job_entry').select('hash').where('job_id', '=', trail).where('seq', '=', seq);
  return (await query.executeTakeFirst())?.hash;
}

/** The workshop remembers every job and how far its trail had come: none can vanish or be cut short. */
async function checkRemembered(
  db: Db,
  ends: ReadonlyMap<string, number>,
  breaks: RecordBreak[],
): Promise<void> {
  const rows = await db
    .selectFrom('workshop_entry')
    .select(['kind', 'body'])
    .where('kind', 'in', ['job-opened', 'head-signed'])
    .orderBy('seq')
    .execute();
  const reached = new Map<string, number>();
  for (const { kind, body } of rows) {
    const data = readBody(body)?.data as { job?: unknown; trail?: unknown; seq?: unknown } | undefined;
    if (kind === 'head-signed' && data !== undefined)
      await checkTold(db, data as unknown as SignedHead, breaks);
    const trail = data?.job ?? data?.trail;
    const seq = typeof data?.seq === 'number' ? data.seq : 1;
    if (typeof trail === 'string') reached.set(trail, Math.max(seq, reached.get(trail) ?? 0));
  }
  for (const [trail, seq] of reached) {
    if ((ends.get(trail) ?? 0) < seq)
      breaks.push({ trail, seq, why: 'The workshop knew this entry, and it is gone.' });
  }
}

/** A head that the workshop tells of is kept as it was signed. */
async function checkTold(
  db: Db,
  { trail, seq, signature }: SignedHead,
  breaks: RecordBreak[],
): Promise<void> {
  const row = await db
    .selectFrom('signed_head')
    .select('signature')
    .where('trail', '=', trail)
    .where('seq', '=', seq)
    .executeTakeFirst();
  if (row?.signature !== signature)
    breaks.push({ trail, seq, why: 'The head that was signed at this entry is gone.' });
}
