import path from 'node:path';
import { sql } from 'kysely';
import sharp from 'sharp';
import { type App } from './compose';
import { stamp } from './clock';
import { sha256Hex } from './crypto';
import { type Asker, isDevice } from './asker';
import { bucketStorage } from './bucket-storage';
import type { Db } from './database';
import type { Device } from './devices';
import { AppError, notFound } from './errors';
import { selectVisibleJobs } from './job-access';
import { folderStorage, type Storage } from './storage';

/*
 * A photograph is named by the SHA-256 of its bytes, and its entry in the trail names that hash. So the bytes
 * are never turned, cut or written again here: they are decoded only to see that they are a picture.
 */

export const PHOTO_TYPES = ['image/jpeg', 'image/png', 'image/webp'] as const;

export type PhotoType = (typeof PHOTO_TYPES)[number];

export const PHOTO_LIMIT_BYTES = 12_000_000;

/** A picture may be small as a file and huge when it is opened; 50 megapixels is beyond any tablet's camera. */
const LIMIT_PIXELS = 50_000_000;

const THUMBNAIL_EDGE = 480;

const storages = new WeakMap<App, Storage>();

/** Where photographs lie: in the bucket that is set, else in the data folder. */
export function photoStorage(app: App): Storage {
  const { bucket, dataDir } = app.settings;
  const known = storages.get(app);
  if (known !== undefined) return known;
  const opened = bucket === undefined ? folderStorage(path.join(dataDir, 'photos')) : bucketStorage(bucket);
  storages.set(app, opened);
  return opened;
}

/** Keeps a photograph under its hash; the same one sent again does no harm. */
export async function storePhoto(
  app: App,
  { hash, bytes, type }: { hash: string; bytes: Uint8Array; type: string },
  device: Device | undefined,
): Promise<{ isNew: boolean }> {
  if (sha256Hex(bytes) !== hash) {
    throw new AppError(
      'invalid-field',
      'The photograph arrived changed: its bytes do not give the hash in the address. It is still on the tablet; send it again.',
      { field: 'hash' },
    );
  }
  if (await isStored(app, hash)) return { isNew: false };
  const thumbnail = await decode(bytes, type);
  const storage = photoStorage(app);
  // The bytes first: a row always stands for bytes that are there.
  await storage.put(`photos/${hash}`, bytes);
  await storage.put(`thumbs/${hash}`, thumbnail);
  await app.db
    .insertInto('photo')
    .values({
      hash,
      bytes: bytes.byteLength,
      type,
      stored_at: stamp(app.clock),
      uploaded_by_device: device?.id ?? null,
    })
    .onConflict((conflict) => conflict.column('hash').doNothing())
    .execute();
  return { isNew: true };
}

/**
 * The photograph's own bytes, or a small WebP of it, for those who may see a job that it belongs to, and for the
 * tablet that sent it. What somebody may not see reads as what is not there.
 */
export async function getPhoto(
  app: App,
  asker: Asker,
  hash: string,
  size: 'full' | 'thumb',
): Promise<{ bytes: Uint8Array; type: string }> {
  const row = await app.db
    .selectFrom('photo')
    .select(['type', 'uploaded_by_device'])
    .where('hash', '=', hash)
    .executeTakeFirst();
  if (row === undefined) throw notFound('This photograph');
  const isSenders = isDevice(asker) && row.uploaded_by_device === asker.id;
  if (!isSenders && !(await isInVisibleJob(app.db, asker, hash))) throw notFound('This photograph');
  const bytes = await photoStorage(app).find(size === 'thumb' ? `thumbs/${hash}` : `photos/${hash}`);
  if (bytes === undefined) {
    app.log.error({ hash, size }, 'A photograph has a row and no bytes: restore it from the backup');
    throw notFound('This photograph');
  }
  return { bytes, type: size === 'thumb' ? 'image/webp' : row.type };
}

/** Whether a job that they may see names the photograph. SQLite only: the index is on the JSON of the entry. */
async function isInVisibleJob(db: Db, asker: Asker, hash: string): Promise<boolean> {
  const row = await selectVisibleJobs(db, asker)
    .where(
      'job.id',
      'in',
      sql<string>`(select job_id from job_entry
        where kind = 'photographed' and json_extract(body, '$.data.photo') = ${hash})`,
    )
    .executeTakeFirst();
  return row !== undefined;
}

/** Kept before, and the bytes are still there: what a disk lost is taken again. */
async function isStored(app: App, hash: string): Promise<boolean> {
  const row = await app.db.selectFrom('photo').select('hash').where('hash', '=', hash).executeTakeFirst();
  return row !== undefined && (await photoStorage(app).has(`photos/${hash}`));
}

/** Opens the picture as what it says it is and makes its thumbnail. */
async function decode(bytes: Uint8Array, type: string): Promise<Uint8Array> {
  const picture = () => sharp(bytes, { limitInputPixels: LIMIT_PIXELS, failOn: 'error' });
  let found: { format: string; pages?: number | undefined };
  try {
    found = await picture().metadata();
  } catch (error) {
    throw notAPicture(error);
  }
  if (`image/${found.format}` !== type) {
    throw new AppError(
      'invalid-field',
      `The photograph is ${found.format} but was sent as ${type}. Send it as what it is.`,
      { field: 'body' },
    );
  }
  if ((found.pages ?? 1) > 1) {
    throw new AppError('invalid-field', 'The photograph moves. Take a still one.', { field: 'body' });
  }
  try {
    return await picture()
      .resize(THUMBNAIL_EDGE, THUMBNAIL_EDGE, { fit: 'inside', withoutEnlargement: true })
      .webp({ quality: 72 })
      .toBuffer();
  } catch (error) {
    throw notAPicture(error);
  }
}

function notAPicture(cause: unknown): AppError {
  return new AppError(
    'invalid-field',
    'The photograph could not be opened: it is broken, too large, or no picture. Take it again; the record of the step stays.',
    { field: 'body', cause },
  );
}
