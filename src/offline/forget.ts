/*
 * What a tablet forgets. Contact data never comes here; the registration and photographs may show who the customer
 * is or which vehicle it was, so they go with an erasure, and from a tablet that a closed job is no business of.
 * Records themselves are never forgotten here.
 */
import { changeJob, ofJob, type EntryRow, type FloorDatabase } from './database';

/** Forgets what the newly pulled entries say was erased; call it in the transaction that takes them over. */
export async function forgetErased(
  db: FloorDatabase,
  job: string,
  rows: readonly Pick<EntryRow, 'recorded'>[],
): Promise<void> {
  for (const { recorded } of rows) {
    if (recorded.kind !== 'erased') continue;
    const { fields, photographs } = recorded.data;
    await forgetPhotographs(db, photographs);
    if (fields.includes('registration')) await changeJob(db, job, { registration: undefined });
  }
}

/** Forgets who a job was for once the server no longer gives it to this tablet and nothing is left to send. */
export async function forgetGone(db: FloorDatabase, job: string): Promise<void> {
  if ((await ofJob(db.outbox, job).count()) > 0) return;
  const sent = await db.photos
    .where('job')
    .equals(job)
    .filter((photo) => photo.sent === 1)
    .primaryKeys();
  await forgetPhotographs(db, sent);
  const row = await db.jobs.get(job);
  if (row?.registration !== undefined) await changeJob(db, job, { registration: undefined });
}

async function forgetPhotographs(db: FloorDatabase, hashes: readonly string[]): Promise<void> {
  await db.photoBytes.bulkDelete([...hashes]);
  await db.photos.bulkDelete([...hashes]);
}
