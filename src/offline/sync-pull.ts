/*
 * Taking over what a job's trail brought. A record leaves the outbox in the same transaction in which it
 * takes its place among the confirmed entries, and only if it is the same record to the letter.
 */
import { officeKinds, type EntryKind } from '@/domain/entry';
import { NO_PREVIOUS } from '@/domain/trail-hash';
import { changeJob, ofJob, type EntryRow, type FloorDatabase, type JobRow, type OutboxRow } from './database';
import { findDevice } from './device';
import { forgetErased, forgetGone } from './forget';
import { entryOf } from './hashing';
import { readPage, type JobAnswer } from './sync-answer';

/** Takes over one job's part of an answer that was asked for after `asked`; tells whether it brought anything. */
export async function applyJobAnswer(
  db: FloorDatabase,
  asked: Pick<JobRow, 'id' | 'have'>,
  answer: JobAnswer,
  at: string,
): Promise<boolean> {
  if (answer.gone) {
    await db.transaction('rw', [db.jobs, db.outbox, db.photos, db.photoBytes], async () => {
      await noteStopped(db, asked.id, GONE);
      await forgetGone(db, asked.id);
    });
    return false;
  }
  return answer.restored ? takeRestored(db, asked, answer, at) : takePage(db, asked, answer);
}

const GONE = {
  code: 'gone',
  words:
    'This job is closed, or no longer open to this tablet. What was recorded here is kept. Ask the supervisor.',
};
const OTHER_CONTENT = {
  code: 'other-content',
  words:
    'The server holds one of the records of this tablet with other content. Nothing of it was taken over and what was recorded here is safe. Tell the supervisor.',
};

async function takePage(
  db: FloorDatabase,
  asked: Pick<JobRow, 'id' | 'have'>,
  answer: JobAnswer,
): Promise<boolean> {
  const page = readPage(asked.id, asked.have, answer.entries);
  const tables = [db.jobs, db.entries, db.outbox, db.refused, db.counters, db.meta, db.photos, db.photoBytes];
  return db.transaction('rw', tables, async () => {
    const row = await db.jobs.get(asked.id);
    // Another tab was quicker: its page is already here, and this one starts from an older place.
    if (!row || row.have?.seq !== asked.have?.seq || row.have?.hash !== asked.have?.hash) return false;
    const taken = await takeRows(db, page.rows);
    await dropRecorded(db, asked.id, page.rows.slice(0, taken));
    await forgetErased(db, asked.id, page.rows.slice(0, taken));
    const stopped = taken === page.rows.length ? page.stopped : OTHER_CONTENT;
    const last = page.rows[taken - 1];
    if (!answer.more && !stopped) {
      await sendAgain(db, asked.id);
      await lookForRefusals(db, asked.id);
    }
    await noteTaken(db, row, { ...answer, last, plan: planMovedTo(page.rows.slice(0, taken)), stopped });
    return taken > 0;
  });
}

/** Writes rows in order and stops at the first that differs from this tablet's own record of it. */
async function takeRows(db: FloorDatabase, rows: readonly EntryRow[]): Promise<number> {
  const device = await findDevice(db);
  let taken = 0;
  for (const row of rows) {
    const own = await db.outbox.where('id').equals(row.id).first();
    if (own && own.contentHash !== row.contentHash) return taken;
    await db.entries.put(own?.sealed ? { ...row, sealed: own.sealed } : row);
    if (own) await db.outbox.delete([own.job, own.place]);
    if (row.device === device?.id) await neverBelow(db, row.job, row.recorded.deviceSeq);
    taken += 1;
  }
  return taken;
}

/** A number that the trail shows as given out is never given out again. */
async function neverBelow(db: FloorDatabase, job: string, deviceSeq: number): Promise<void> {
  const counter = (await db.counters.get(job)) ?? { job, deviceSeq: 0, place: 0 };
  if (counter.deviceSeq < deviceSeq) await db.counters.put({ ...counter, deviceSeq });
}

/** What was told as recorded but is not in the trail to its end was lost again: it is sent once more. */
async function sendAgain(db: FloorDatabase, job: string): Promise<void> {
  await ofJob(db.outbox, job)
    .filter((row) => row.where === 'sent')
    .modify({ where: 'on this tablet' });
}

/** After a restore a copy of this tablet may have been quicker, and got another verdict: the trail is right. */
async function dropRecorded(db: FloorDatabase, job: string, rows: readonly EntryRow[]): Promise<void> {
  const refused = await db.refused.where('job').equals(job).toArray();
  for (const { id, contentHash } of refused)
    if (rows.some((row) => row.id === id && row.contentHash === contentHash)) await db.refused.delete(id);
}

/** A refusal that the trail to its end does not tell of was lost with a restore, and is told once more. */
async function lookForRefusals(db: FloorDatabase, job: string): Promise<void> {
  const refused = await db.refused.where('job').equals(job).toArray();
  const untold = refused.filter(({ inTrail }) => typeof inTrail !== 'number');
  if (untold.length === 0) return;
  const told = new Map<string, number>();
  for (const { seq, recorded } of await ofJob(db.entries, job).toArray())
    if (recorded.kind === 'refused') told.set(recorded.data.content, seq);
  for (const row of untold) await db.refused.put({ ...row, inTrail: told.get(row.contentHash) ?? null });
}

function planMovedTo(rows: readonly EntryRow[]): string | undefined {
  return rows.reduce<string | undefined>(
    (plan, { recorded }) => (recorded.kind === 'plan-moved' ? recorded.data.to : plan),
    undefined,
  );
}

interface Taken {
  last: EntryRow | undefined;
  plan: string | undefined;
  head?: JobAnswer['head'];
  stopped: JobRow['stopped'];
}

async function noteTaken(
  db: FloorDatabase,
  row: JobRow,
  { last, plan, head, stopped }: Taken,
): Promise<void> {
  const isSame = !last && row.stopped?.code === stopped?.code && row.head.hash === (head ?? row.head).hash;
  if (isSame) return;
  await changeJob(db, row.id, {
    ...(last ? { have: { seq: last.seq, hash: last.hash } } : {}),
    ...(plan === undefined ? {} : { plan }),
    ...(head ? { head } : {}),
    stopped,
  });
}

async function noteStopped(db: FloorDatabase, job: string, stopped: JobRow['stopped']): Promise<void> {
  const row = await db.jobs.get(job);
  if (row && row.stopped?.code !== stopped?.code) await changeJob(db, job, { stopped });
}

/** Far enough below every place that a record made here can have. */
const BEFORE_ALL = 1_000_000_000;

/**
 * The server was restored from a backup and lacks the end of what this tablet has as confirmed. Everything
 * after the last entry that both have goes back into the outbox, unchanged, before what is there already.
 */
async function takeRestored(
  db: FloorDatabase,
  asked: Pick<JobRow, 'id' | 'have'>,
  answer: JobAnswer,
  at: string,
): Promise<boolean> {
  const page = readPage(asked.id, null, answer.entries);
  const tables = [db.jobs, db.entries, db.outbox, db.refused, db.setAside, db.photos];
  return db.transaction('rw', tables, async () => {
    const row = await db.jobs.get(asked.id);
    if (!row || row.have?.hash !== asked.have?.hash) return false;
    if (page.stopped && page.rows.length === 0) {
      await noteStopped(db, row.id, page.stopped);
      return false;
    }
    const common = await lastCommon(db, page.rows);
    await ofJob(db.outbox, row.id).modify({ restored: true });
    await putBack(db, row.id, common?.seq ?? 0, at);
    await forgetTold(db, row.id, common?.seq ?? 0);
    await sendAgain(db, row.id);
    await db.photos.where('job').equals(row.id).modify({ sent: 0 });
    await changeJob(db, row.id, {
      have: common ? { seq: common.seq, hash: common.hash } : null,
      head: answer.head ?? { seq: 0, hash: NO_PREVIOUS },
      stopped: undefined,
    });
    return true;
  });
}

async function lastCommon(db: FloorDatabase, rows: readonly EntryRow[]): Promise<EntryRow | undefined> {
  let common: EntryRow | undefined;
  for (const row of rows) {
    const own = await db.entries.get([row.job, row.seq]);
    if (own?.hash !== row.hash) return common;
    common = own;
  }
  return common;
}

/** What the trail told of after the last common entry, it does not tell of any more. */
async function forgetTold(db: FloorDatabase, job: string, after: number): Promise<void> {
  await db.refused
    .where('job')
    .equals(job)
    .filter(({ inTrail }) => typeof inTrail !== 'number' || inTrail > after)
    .modify({ inTrail: null });
}

async function putBack(db: FloorDatabase, job: string, after: number, at: string): Promise<void> {
  const lost = await ofJob(db.entries, job, after).toArray();
  await db.setAside.bulkPut(lost.map((row) => ({ hash: row.hash, job, row, setAsideAt: at })));
  await db.outbox.bulkPut(lost.filter(canBeSent).map(toOutbox));
  await db.entries.bulkDelete(lost.map(({ seq }): [string, number] => [job, seq]));
}

/**
 * The server makes its own entries anew. A signature made on another tablet has its sealed PIN there, and
 * sent without it would be refused for good.
 */
function canBeSent({ recorded, sealed }: EntryRow): boolean {
  if (isOneOf(officeKinds, recorded.kind)) return false;
  return sealed !== undefined || !isOneOf(SIGNED_WITH_PIN, recorded.kind);
}

const SIGNED_WITH_PIN = ['signed', 'countersigned'] as const satisfies EntryKind[];

function isOneOf(kinds: readonly EntryKind[], kind: EntryKind): boolean {
  return kinds.includes(kind);
}

function toOutbox(row: EntryRow): OutboxRow {
  const { job, seq, id, recorded, contentHash, signature, key, sealed } = row;
  return {
    ...{ job, id, contentHash, signature, key, sealed },
    place: seq - BEFORE_ALL,
    entry: entryOf(recorded),
    where: 'on this tablet',
    restored: true,
  };
}
