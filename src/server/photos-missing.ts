import type { Entry } from '@/domain/entry';
import { type JobPhoto, photoName, photosMissing, photosOf } from '@/domain/job-photos';
import type { JobState } from '@/domain/job-state';
import type { App } from './compose';
import type { Db } from './database';
import type { JobFold } from './job-fold';
import { photoStorage } from './photos';
import type { Batch } from './sync-batch';

/*
 * A job is not handed over while the bytes of a photograph in its record are missing: they are still on a tablet,
 * or they are lost. The record itself says what gets it out of that: the photograph taken again, or a deviation
 * that names it and that who may has disposed of.
 */

/** A photograph in a job's record whose bytes the server does not have. */
export interface MissingPhotograph {
  entry: string;
  hash: string;
  /** What it is called where a deviation names it. */
  name: string;
  subject: string;
  at: string;
  /** The tablet that took it. */
  tablet: string;
  /** Whether a handover waits for it: not taken again, not disposed of. */
  isAwaited: boolean;
}

/** The photographs of a job whose bytes are not here. */
export async function listMissingPhotographs(
  app: App,
  state: JobState,
  reader: Db = app.db,
): Promise<MissingPhotograph[]> {
  const photos = photosOf(state);
  const there = await findThere(app, reader, photos);
  const awaited = new Set(photosMissing(state, (hash) => there.has(hash)).map(({ entry }) => entry));
  const absent = photos.filter(({ hash }) => !there.has(hash));
  const tablets = await readTabletNames(reader, absent);
  return absent.map(({ entry, hash, subject, at, device }) => ({
    ...{ entry, hash, subject, at, name: photoName(hash) },
    tablet: tablets.get(device) ?? 'a tablet that is not known here',
    isAwaited: awaited.has(entry),
  }));
}

/** Why a handover has to wait for photographs; what was taken again later in the same push counts as here. */
export async function whyWaitForPhotographs(
  batch: Batch,
  fold: JobFold,
  entry: Entry,
): Promise<string | undefined> {
  if (entry.kind !== 'handed-over') return undefined;
  const missing = await listMissingPhotographs(batch.app, fold.state, batch.trx);
  const awaited = missing.filter(({ isAwaited }) => isAwaited);
  if (awaited.length === 0) return undefined;
  const again = await findTakenAgain(batch, entry, fold.state);
  const left = awaited.filter((one) => !again.has(one.entry));
  return left.length === 0 ? undefined : waitWords(left);
}

/**
 * A tablet counts its records, so one that was taken again after the handover can only be recorded after it:
 * neither may wait for the other.
 */
async function findTakenAgain(batch: Batch, handover: Entry, state: JobState): Promise<Set<string>> {
  const later = batch.pushed.flatMap(({ index, read }) =>
    read.ok &&
    read.entry.kind === 'photographed' &&
    read.entry.job === handover.job &&
    read.entry.device === handover.device &&
    read.entry.deviceSeq > handover.deviceSeq &&
    batch.proofs.get(index) === true
      ? [{ step: read.entry.step, subject: read.entry.data.subject, hash: read.entry.data.photo }]
      : [],
  );
  const there = await findThere(batch.app, batch.trx, later);
  const isAgain = (photo: JobPhoto) =>
    later.some(
      ({ step, subject, hash }) => step === photo.step && subject === photo.subject && there.has(hash),
    );
  return new Set(photosOf(state).flatMap((photo) => (isAgain(photo) ? [photo.entry] : [])));
}

function waitWords(missing: readonly MissingPhotograph[]): string {
  const named = missing
    .slice(0, 3)
    .map(({ subject, name, tablet }) => `“${subject}” (${name}, on ${tablet})`);
  const more = missing.length > named.length ? ` and ${missing.length - named.length} more` : '';
  const [what, them] =
    missing.length === 1
      ? ['a photograph that has not', 'it is lost, take it']
      : ['photographs that have not', 'one is lost, take it'];
  return `The handover waits for ${what} come to the server yet: ${named.join(', ')}${more}. Bring the tablet to the network. If ${them} again at its step, or raise a deviation that names it and have it disposed of.`;
}

async function findThere(
  app: App,
  reader: Db,
  photos: readonly { hash: string }[],
): Promise<ReadonlySet<string>> {
  const hashes = [...new Set(photos.map(({ hash }) => hash))];
  if (hashes.length === 0) return new Set();
  const rows = await reader.selectFrom('photo').select('hash').where('hash', 'in', hashes).execute();
  const storage = photoStorage(app);
  const there = await Promise.all(
    rows.map(async ({ hash }) => ((await storage.has(`photos/${hash}`)) ? [hash] : [])),
  );
  return new Set(there.flat());
}

async function readTabletNames(
  reader: Db,
  photos: readonly { device: string }[],
): Promise<ReadonlyMap<string, string>> {
  if (photos.length === 0) return new Map();
  const ids = [...new Set(photos.map(({ device }) => device))];
  const rows = await reader.selectFrom('device').select(['id', 'name']).where('id', 'in', ids).execute();
  return new Map(rows.map(({ id, name }) => [id, name]));
}
