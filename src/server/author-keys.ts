import { createPublicKey } from 'node:crypto';
import { authorKeyId } from '@/domain/trail';
import { type Actor, hasRole } from './actor';
import { type Clock, type Ids, stamp } from './clock';
import { sha256Hex } from './crypto';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import type { Device } from './devices';
import { AppError, notFound } from './errors';
import { appendWorkshopEntry, findLastRestore } from './workshop-trail';

/** The public half of the key with which one person signs their entries on one tablet. */
export interface AuthorKey {
  id: string;
  person: string;
  device: string;
  /** The raw uncompressed P-256 point, base64url. */
  publicKey: string;
  enrolledAt: string;
  /** The workshop entry that enrolled it. */
  workshopSeq: number;
  revokedAt: string | null;
}

/**
 * Enrols the acting person's key on a tablet; enrolling the same key again changes nothing. `again`: the tablet says
 * that it had been enrolled, which a restore took back; the trail tells of it if it tells of a restore.
 */
export async function enrolKey(
  trx: Trx,
  actor: Actor,
  device: Device,
  { publicKey, again = false }: { publicKey: string; again?: boolean | undefined },
  app: { clock: Clock; ids: Ids },
): Promise<AuthorKey> {
  const point = requirePoint(publicKey);
  const id = authorKeyId(point, sha256Hex);
  const known = await findKey(trx, id);
  if (known !== undefined) {
    if (known.person === actor.personId && known.device === device.id && known.revokedAt === null)
      return known;
    throw new AppError(
      'conflict',
      'This key is enrolled for somebody else, for another tablet, or was revoked. Make a new one.',
      {
        field: 'publicKey',
      },
    );
  }
  const restoredAt = again ? await findLastRestore(trx) : undefined;
  const data = {
    ...{ key: id, publicKey, person: actor.personId, tablet: device.id },
    ...(restoredAt === undefined ? {} : { afterRestore: restoredAt }),
  };
  const { seq } = await appendWorkshopEntry(trx, actor, { kind: 'key-enrolled', data }, app);
  const key: AuthorKey = {
    id,
    person: actor.personId,
    device: device.id,
    publicKey,
    enrolledAt: stamp(app.clock),
    workshopSeq: seq,
    revokedAt: null,
  };
  await trx
    .insertInto('author_key')
    .values({
      id,
      person_id: key.person,
      device_id: key.device,
      public_key: publicKey,
      enrolled_at: key.enrolledAt,
      workshop_seq: seq,
      revoked_at: null,
    })
    .execute();
  return key;
}

/** One author key by its id. */
export async function findKey(db: Db, id: string): Promise<AuthorKey | undefined> {
  const row = await db.selectFrom('author_key').selectAll().where('id', '=', id).executeTakeFirst();
  return row === undefined ? undefined : toKey(row);
}

/** All keys of a person, or everybody's for those who may see all, in the order of enrolment, a page at a time. */
export async function listKeys(
  db: Db,
  actor: Actor,
  { cursor }: { cursor?: string | undefined } = {},
): Promise<{ keys: AuthorKey[]; cursor?: string }> {
  const all = hasRole(actor, 'supervisor', 'quality lead', 'auditor', 'owner');
  let query = db
    .selectFrom('author_key')
    .selectAll()
    .orderBy('enrolled_at')
    .orderBy('id')
    .limit(LIST_PAGE + 1);
  if (!all) query = query.where('person_id', '=', actor.personId);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('enrolled_at', 'id'), '>', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, (row) => [row.enrolled_at, row.id]);
  return { keys: rows.map(toKey), ...next };
}

/** Revokes a key: one's own, or anybody's for the owner and a supervisor. What it signed before stays proved. */
export async function revokeKey(
  trx: Trx,
  actor: Actor,
  id: string,
  app: { clock: Clock; ids: Ids },
): Promise<AuthorKey> {
  const key = await findKey(trx, id);
  const may = key !== undefined && (key.person === actor.personId || hasRole(actor, 'owner', 'supervisor'));
  if (!may) throw notFound('This key');
  if (key.revokedAt !== null) return key;
  const revokedAt = stamp(app.clock);
  await trx.updateTable('author_key').set({ revoked_at: revokedAt }).where('id', '=', id).execute();
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'key-revoked', data: { key: id, person: key.person, tablet: key.device } },
    app,
  );
  return { ...key, revokedAt };
}

/** A raw uncompressed point that lies on the curve; anything else could never verify a signature. */
function requirePoint(publicKey: string): Uint8Array {
  const point = Buffer.from(publicKey, 'base64url');
  const isShaped = point.length === 65 && point[0] === 4 && point.toString('base64url') === publicKey;
  try {
    if (!isShaped) throw new RangeError('not an uncompressed P-256 point');
    createPublicKey({
      key: {
        kty: 'EC',
        crv: 'P-256',
        x: point.subarray(1, 33).toString('base64url'),
        y: point.subarray(33).toString('base64url'),
      },
      format: 'jwk',
    });
  } catch (cause) {
    throw new AppError(
      'invalid-field',
      'publicKey has to be the raw 65-byte point of a P-256 key, base64url.',
      {
        field: 'publicKey',
        cause,
      },
    );
  }
  return point;
}

function toKey(row: {
  id: string;
  person_id: string;
  device_id: string;
  public_key: string;
  enrolled_at: string;
  workshop_seq: number;
  revoked_at: string | null;
}): AuthorKey {
  return {
    id: row.id,
    person: row.person_id,
    device: row.device_id,
    publicKey: row.public_key,
    enrolledAt: row.enrolled_at,
    workshopSeq: row.workshop_seq,
    revokedAt: row.revoked_at,
  };
}
