import { appendFile, mkdir, open, readFile } from 'node:fs/promises';
import path from 'node:path';
import * as z from 'zod';
import type { Actor } from './actor';
import { requireRole, THE_WORKSHOP } from './actor';
import { stamp } from './clock';
import type { App } from './compose';
import type { Trx } from './database';
import { AppError } from './errors';
import { getVisibleJob } from './job-access';
import { getFold, rememberFolds } from './job-fold';
import { IDENTITY_FIELDS } from './job-identity';
import { recordOfficeEntries, type Recording } from './office-entries';
import { photosOf } from '@/domain/job-photos';
import { photoStorage } from './photos';
import { appendWorkshopEntry } from './workshop-trail';

/*
 * Erasing personal data. What goes is the values, their salts, marked photographs and the letters to the
 * customer; what stays is the chain, with an entry that tells of it: an erased field verifies as erased, not as
 * broken. A backup may still hold what was erased, so each erasure is also written to a file beside the database
 * that no backup takes along, and is repeated on a data folder that was restored.
 */

/** What is to be erased of a job, and why. */
export interface Erasure {
  fields: readonly string[];
  photographs: readonly string[];
  reason: string;
}

/** The columns of a job by which the customer or the vehicle is known, and the photographs marked to show them. */
export async function erasePersonalData(app: App, actor: Actor, id: string, erasure: Erasure): Promise<void> {
  requireRole(actor, 'owner');
  const job = await getVisibleJob(app.db, actor, id);
  if (job.state === 'open' || job.state === 'parked') {
    throw new AppError(
      'conflict',
      'The job is still running: who the customer is and how to reach them is needed until it ends. Nothing was erased. End the job first.',
    );
  }
  const memory = app.db;
  const folds = await app.db.transaction().execute(async (trx) => {
    await requireErasable({ app, memory, trx }, id, erasure);
    return erase({ app, memory, trx }, actor, id, erasure);
  });
  rememberFolds(app.db, folds);
  await noteForRestores(app, { ...erasure, job: id });
  await removeBytes(app, erasure.photographs);
}

async function requireErasable({ memory, trx }: Recording, job: string, erasure: Erasure): Promise<void> {
  const unknown = erasure.fields.find((field) => !(IDENTITY_FIELDS as readonly string[]).includes(field));
  if (unknown !== undefined) throw wrong('fields', `There is no field "${unknown}".`);
  const { state } = await getFold(memory, job, trx);
  const marked = new Set(photosOf(state).flatMap(({ hash, identity }) => (identity === true ? [hash] : [])));
  if (erasure.photographs.some((hash) => !marked.has(hash)))
    throw wrong('photographs', 'Only photographs of this job that are marked "shows identity" are erased.');
  if (erasure.fields.length + erasure.photographs.length === 0) throw wrong('fields', 'Name what is to go.');
}

function wrong(field: string, why: string): AppError {
  return new AppError('invalid-field', `${why} Nothing was erased.`, { field });
}

async function erase(within: Recording, actor: Actor, job: string, erasure: Erasure) {
  const { app, trx } = within;
  const { fields, photographs, reason } = erasure;
  const data = { fields: [...fields], photographs: [...photographs], reason, decidedBy: actor.personId };
  const folds = await recordOfficeEntries(within, [{ job, kind: 'erased', data }]);
  await deleteRows(trx, job, erasure);
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'erased', data: { job, fields: [...fields], photographs: [...photographs] } },
    app,
  );
  return folds;
}

async function deleteRows(trx: Trx, job: string, { fields, photographs }: Omit<Erasure, 'reason'>) {
  await trx.deleteFrom('job_identity').where('job_id', '=', job).where('field', 'in', fields).execute();
  // A letter to the customer names them by its address.
  if (fields.includes('customerEmail') || fields.includes('customerName'))
    await trx
      .deleteFrom('mail')
      .where('job_id', '=', job)
      .where('purpose', '=', 'handover to customer')
      .execute();
  await trx.deleteFrom('photo').where('hash', 'in', photographs).execute();
}

async function removeBytes(app: App, photographs: readonly string[]): Promise<void> {
  const storage = photoStorage(app);
  for (const hash of photographs) {
    await storage.remove(`photos/${hash}`);
    await storage.remove(`thumbs/${hash}`);
  }
}

/** The erasures of this data folder, a line each; not part of a backup. */
export const ERASURES_FILE = 'erasures.jsonl';

const noted = z.strictObject({
  job: z.string(),
  fields: z.array(z.string()),
  photographs: z.array(z.string()),
  reason: z.string(),
  at: z.string(),
});

async function noteForRestores(app: App, erasure: Erasure & { job: string }): Promise<void> {
  const { dataDir } = app.settings;
  await mkdir(dataDir, { recursive: true });
  const file = path.join(dataDir, ERASURES_FILE);
  await appendFile(file, `${JSON.stringify({ ...erasure, at: stamp(app.clock) })}\n`, { mode: 0o600 });
  const handle = await open(file, 'r+');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

/** Reads the noted erasures from a file; none where there is no such file. */
export async function readErasures(file: string): Promise<z.infer<typeof noted>[]> {
  let text: string;
  try {
    text = await readFile(file, 'utf8');
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return [];
    throw error;
  }
  return text
    .split('\n')
    .filter((line) => line !== '')
    .map((line) => noted.parse(JSON.parse(line)));
}

/** Repeats the noted erasures whose data is there again after a restore; gives how many were repeated. */
export async function repeatErasures(app: App): Promise<number> {
  let repeated = 0;
  for (const { job, fields, photographs, reason } of await readErasures(
    path.join(app.settings.dataDir, ERASURES_FILE),
  )) {
    if (!(await isBack(app, job, { fields, photographs }))) continue;
    const again = { fields, photographs, reason: `Repeated after a restore. ${reason}` };
    const memory = app.db;
    const folds = await app.db
      .transaction()
      .execute((trx) => erase({ app, memory, trx }, THE_WORKSHOP, job, again));
    rememberFolds(app.db, folds);
    await removeBytes(app, photographs);
    repeated += 1;
  }
  return repeated;
}

async function isBack(
  app: App,
  job: string,
  { fields, photographs }: Omit<Erasure, 'reason'>,
): Promise<boolean> {
  const known = await app.db.selectFrom('job').select('id').where('id', '=', job).executeTakeFirst();
  if (known === undefined) return false;
  const value = await app.db
    .selectFrom('job_identity')
    .select('field')
    .where('job_id', '=', job)
    .where('field', 'in', fields)
    .executeTakeFirst();
  const photo = await app.db
    .selectFrom('photo')
    .select('hash')
    .where('hash', 'in', photographs)
    .executeTakeFirst();
  return value !== undefined || photo !== undefined;
}
