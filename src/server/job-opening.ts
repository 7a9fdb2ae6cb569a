import { hashJson } from '@/domain/canonical';
import type { Entry, EntryOf } from '@/domain/entry';
import { mayRecord } from '@/domain/job';
import { type Actor, requireRole } from './actor';
import { findKey } from './author-keys';
import { isSignedBy } from './author-signature';
import type { App } from './compose';
import { sha256Hex } from './crypto';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { beginFold, rememberFolds } from './job-fold';
import { type Identity, requireCommitted, storeIdentity } from './job-identity';
import { makeUpLost } from './lost-workshop';
import { compileReleased, getPlan } from './plans';
import type { CanonicalField } from './recorded-text';
import { readReleased } from './released-documents';
import { beginBatch, type Batch, flush, record } from './sync-batch';
import { type ReadItem, readItem } from './sync-read';
import { getWorkshopDetails } from './workshop';
import { readWorkshopHistory } from './workshop-history';
import { appendWorkshopEntry, workshopSeq } from './workshop-trail';

export interface Opening {
  entry: unknown;
  signature: string;
  key: string;
  identity: Identity;
  people: string[];
}

/** The number that the next job gets: the year in the workshop's zone, and a count within it. */
export async function nextJobNumber(db: Db, actor: Actor, app: Pick<App, 'clock'>): Promise<string> {
  requireRole(actor, 'supervisor', 'owner');
  const { zone } = await getWorkshopDetails(db);
  const year = new Intl.DateTimeFormat('en-GB', { timeZone: zone, year: '2-digit' }).format(app.clock.now());
  const last = await db
    .selectFrom('job')
    .select('number')
    .where('number', 'like', `${year}-%`)
    .orderBy((eb) => eb.fn('length', ['number']), 'desc')
    .orderBy('number', 'desc')
    .limit(1)
    .executeTakeFirst();
  const count = Number(last?.number.split('-')[1] ?? 0) + 1;
  return `${year}-${String(count).padStart(3, '0')}`;
}

/** Opens a job: its first entry is in its trail and the workshop's own trail tells of it, or nothing happened. */
export async function openJob(
  app: App,
  actor: Actor,
  opening: Opening,
): Promise<{ id: string; number: string; isNew: boolean }> {
  requireRole(actor, 'supervisor', 'owner');
  const { identity, people, ...sent } = opening;
  const item = readItem(sent, 0);
  const { entry, fields } = requireOpened(item, actor);
  await requireKnownWorkshop(app, item, entry);
  // The history is remembered by the database, and read by the transaction alone.
  const { db: memory } = app;
  const { result, fold } = await app.db.transaction().execute(async (trx) => {
    const known = await findOpened(trx, item, entry);
    if (known !== undefined) return { result: { ...known, isNew: false }, fold: undefined };
    const history = await readWorkshopHistory(memory, trx);
    await requireSigned(trx, item, entry);
    requireCommitted(identity, entry.data.commitments);
    await requirePlan(trx, entry);
    await requireFreeNumber(trx, entry);
    const plan = await getPlan(trx, entry.plan);
    const begun = beginFold(entry.job, entry.plan, plan);
    const workshop = history.at(history.seq);
    const verdict = mayRecord(begun.state, entry, workshop);
    if (!verdict.ok) throw new AppError('not-allowed', `${verdict.why} Nothing was opened.`);
    requireTrueAuthor(entry, workshop.people);
    requirePeople(people, workshop.people);
    await insertJob(trx, entry, people);
    await storeIdentity(trx, entry.job, identity);
    const batch = await openingBatch(app, trx, item, history);
    const { contentHash } = item;
    record(
      batch,
      begun,
      { entry, fields, contentHash, signature: sent.signature, key: sent.key },
      { clockOffsetMs: 0 },
    );
    await flush(batch);
    const opened = batch.folds.get(entry.job);
    const data = { job: entry.job, number: entry.data.number, plan: entry.plan, content: contentHash };
    await appendWorkshopEntry(trx, actor, { kind: 'job-opened', data }, app);
    return { result: { id: entry.job, number: entry.data.number, isNew: true }, fold: opened };
  });
  if (fold !== undefined) rememberFolds(app.db, [fold]);
  return result;
}

/** What is opened names a workshop entry that is there, or that a restore took back and that is made up for. */
async function requireKnownWorkshop(app: App, item: ReadItem, entry: Entry): Promise<void> {
  if (entry.workshop <= (await workshopSeq(app.db))) return;
  await requireSigned(app.db, item, entry);
  await makeUpLost(app, entry.device, entry.workshop);
  if (entry.workshop <= (await workshopSeq(app.db))) return;
  throw wrong('entry.workshop', 'It names an entry of the workshop that was never there. Reload the page.');
}

async function openingBatch(
  app: App,
  trx: Trx,
  item: ReadItem,
  history: Awaited<ReturnType<typeof readWorkshopHistory>>,
): Promise<Batch> {
  const receivedAt = app.clock.now().toISOString();
  return beginBatch(
    {
      app,
      trx,
      history,
      receivedAt,
      clockOffsetMs: 0,
      pins: new Map(),
      proofs: new Map(),
      isCareful: true,
      device: undefined,
    },
    [item],
  );
}

function requireOpened(
  item: ReadItem,
  actor: Actor,
): { entry: EntryOf<'opened'>; fields: readonly CanonicalField[] } {
  const { read } = item;
  if (!read.ok) {
    const why = read.newer ? 'it is of a newer kind than the server knows' : read.why;
    throw wrong('entry', `The job could not be opened: ${why}.`);
  }
  const { entry, fields } = read;
  if (entry.kind !== 'opened') throw wrong('entry.kind', 'A job begins with an entry of the kind "opened".');
  if (entry.by !== actor.personId) throw wrong('entry.by', 'A job is opened by the person who is signed in.');
  if (entry.basis !== 0)
    throw wrong('entry.basis', 'The first entry of a job has no entry before it: basis is 0.');
  if (entry.deviceSeq !== 1) throw wrong('entry.deviceSeq', 'The first entry of a job has the number 1.');
  return { entry, fields };
}

/** The same opening sent again, after an answer that was lost, is answered again. */
async function findOpened(
  trx: Trx,
  item: ReadItem,
  entry: Entry,
): Promise<{ id: string; number: string } | undefined> {
  const row = await trx
    .selectFrom('job_entry')
    .innerJoin('job', 'job.id', 'job_entry.job_id')
    .select(['job_entry.job_id', 'job_entry.content_hash', 'job.number'])
    .where('job_entry.id', '=', entry.id)
    .executeTakeFirst();
  if (row === undefined) {
    const other = await trx.selectFrom('job').select('id').where('id', '=', entry.job).executeTakeFirst();
    if (other !== undefined) throw taken('entry.job', 'A job with this id is there already.');
    return undefined;
  }
  if (row.content_hash !== item.contentHash)
    throw taken('entry.id', 'An entry with this id is there already.');
  return { id: row.job_id, number: row.number };
}

async function requireSigned(db: Db, item: ReadItem, entry: Entry): Promise<void> {
  const key = item.carried === undefined ? undefined : await findKey(db, item.carried.key);
  if (item.carried === undefined || key === undefined) {
    throw wrong('key', 'This key is not enrolled. Sign in on this browser again, so that it enrols one.');
  }
  if (key.person !== entry.by || key.device !== entry.device || key.revokedAt !== null) {
    throw wrong('key', 'This key is of another person or browser, or it was revoked.');
  }
  if (!isSignedBy(key.publicKey, item.contentHash, item.carried.signature)) {
    throw wrong('signature', 'The signature does not fit the entry.');
  }
}

/** The plan must be the one that the released documents give now for these options. */
async function requirePlan(trx: Trx, entry: EntryOf<'opened'>): Promise<void> {
  const row = await trx.selectFrom('plan').select('hash').where('hash', '=', entry.plan).executeTakeFirst();
  if (row === undefined) throw wrong('entry.plan', 'This plan is not known. Prepare the job first.');
  const plan = await getPlan(trx, entry.plan);
  const { engine, options } = entry.data;
  if (engine !== plan.engine.name) throw wrong('entry.data.engine', 'This is not the engine of the plan.');
  if (hashJson(options, sha256Hex) !== hashJson(plan.options, sha256Hex)) {
    throw wrong('entry.data.options', 'These are not the options that the plan was made for.');
  }
  const now = compileReleased(await readReleased(trx), { route: plan.route.id, options });
  if (hashJson(now, sha256Hex) !== entry.plan) {
    throw new AppError(
      'conflict',
      'The procedures were revised while you filled this in. Prepare the job again; what you typed is kept.',
      { field: 'entry.plan' },
    );
  }
}

async function requireFreeNumber(trx: Trx, entry: EntryOf<'opened'>): Promise<void> {
  const { number } = entry.data;
  const other = await trx.selectFrom('job').select('id').where('number', '=', number).executeTakeFirst();
  if (other !== undefined) {
    throw taken(
      'entry.data.number',
      `Job ${number} was opened meanwhile. Prepare the job again for a new number.`,
    );
  }
}

function requireTrueAuthor(
  entry: Entry,
  people: readonly { id: string; name: string; roles: string[] }[],
): void {
  const person = people.find(({ id }) => id === entry.by);
  const { name, roles } = entry.author;
  const isTrue =
    person?.name === name &&
    person.roles.length === roles.length &&
    person.roles.every((role) => roles.includes(role));
  if (!isTrue)
    throw wrong('entry.author', 'The name or the roles written on it are not those that the workshop has.');
}

function requirePeople(people: readonly string[], known: readonly { id: string; active: boolean }[]): void {
  const index = people.findIndex((id) => !known.some((person) => person.id === id && person.active));
  if (index >= 0) throw wrong(`people.${index}`, 'The workshop has no such person at work.');
}

async function insertJob(trx: Trx, entry: EntryOf<'opened'>, people: readonly string[]): Promise<void> {
  const { data } = entry;
  const plan = await getPlan(trx, entry.plan);
  await trx
    .insertInto('job')
    .values({
      id: entry.job,
      number: data.number,
      plan_hash: entry.plan,
      route_id: plan.route.id,
      state: 'open',
      opened_by: entry.by,
      opened_at: entry.at,
      promised_on: data.promisedOn ?? null,
      note: data.note ?? null,
      // No name and no registration: those can be erased, and this stays.
      vehicle_label: plan.engine.name,
    })
    .execute();
  const rows = [...new Set(people)].map((person) => ({ job_id: entry.job, person_id: person }));
  if (rows.length > 0) await trx.insertInto('job_person').values(rows).execute();
}

function wrong(field: string, message: string): AppError {
  return new AppError('invalid-field', message, { field });
}

function taken(field: string, message: string): AppError {
  return new AppError('conflict', message, { field });
}
