import type { DeviceRow } from '@db/tables';
import { type Actor, requireRole } from './actor';
import { type Clock, type Ids, stamp } from './clock';
import { isSameDigest, newSecret, sha256Hex } from './crypto';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { appendWorkshopEntry, findLastRestore } from './workshop-trail';

/** A browser that was enrolled as a tablet. */
export interface Device {
  id: string;
  name: string;
  state: 'active' | 'lost';
  enrolledBy: string;
  enrolledAt: string;
  lastHeardAt: string | null;
}

/**
 * Enrols a browser as a tablet; the credential is given out this once and only its hash is kept. A tablet that a
 * restore took back shows the one that it was given then, and keeps it: so it does no harm if that comes twice.
 */
export async function enrolDevice(
  trx: Trx,
  actor: Actor,
  { id, name, credential: shown }: { id: string; name: string; credential?: string | undefined },
  app: { clock: Clock; ids: Ids },
): Promise<{ device: Device; credential: string }> {
  const restoredAt = shown === undefined ? undefined : await findLastRestore(trx);
  const credential = restoredAt === undefined || shown === undefined ? newSecret() : shown;
  const known = await trx.selectFrom('device').selectAll().where('id', '=', id).executeTakeFirst();
  if (known?.state === 'active' && isSameDigest(known.credential_hash, sha256Hex(credential))) {
    return { device: toDevice(known), credential };
  }
  if (known !== undefined) {
    throw new AppError(
      'conflict',
      'A tablet with this id is enrolled already. Make a new id and enrol again.',
      { field: 'id' },
    );
  }
  const row: DeviceRow = {
    id,
    name,
    credential_hash: sha256Hex(credential),
    enrolled_by: actor.personId,
    enrolled_at: stamp(app.clock),
    state: 'active',
    last_heard_at: null,
  };
  await trx.insertInto('device').values(row).execute();
  const data = { tablet: id, name, ...(restoredAt === undefined ? {} : { afterRestore: restoredAt }) };
  await appendWorkshopEntry(trx, actor, { kind: 'tablet-enrolled', data }, app);
  return { device: toDevice(row), credential };
}

/** The tablet that sends this request, proved by its credential; undefined if it sends none. */
export async function findRequestDevice(db: Db, request: Request): Promise<Device | undefined> {
  const header = request.headers.get('authorization');
  if (header === null) return undefined;
  const match = /^Tablet ([0-9a-f-]{36})\.([\w-]{43})$/.exec(header);
  const row =
    match === null
      ? undefined
      : await db
          .selectFrom('device')
          .selectAll()
          .where('id', '=', match[1] ?? '')
          .executeTakeFirst();
  if (row === undefined || !isSameDigest(row.credential_hash, sha256Hex(match?.[2] ?? ''))) {
    throw new AppError(
      'unknown-tablet',
      'This tablet is not known to the workshop. What it recorded is still on it: sign in and enrol it again, or save its records as a file.',
    );
  }
  if (row.state === 'lost') {
    throw new AppError(
      'lost-tablet',
      'This tablet was declared lost. What it recorded is still on it: ask a supervisor to take it back into use, or save its records as a file and bring that to the office.',
    );
  }
  return toDevice(row);
}

/** The tablet that sends this request; refuses if it does not prove which one it is. */
export async function requireDevice(db: Db, request: Request): Promise<Device> {
  const device = await findRequestDevice(db, request);
  if (device !== undefined) return device;
  throw new AppError(
    'unknown-tablet',
    'This has to come from an enrolled tablet. Sign in on it and enrol it first.',
  );
}

/** Every tablet of the workshop, the newest first, a page at a time. */
export async function listDevices(
  db: Db,
  actor: Actor,
  { cursor }: { cursor?: string | undefined } = {},
): Promise<{ devices: Device[]; cursor?: string }> {
  requireRole(actor, 'owner', 'supervisor', 'quality lead', 'auditor');
  let query = db
    .selectFrom('device')
    .selectAll()
    .orderBy('enrolled_at', 'desc')
    .orderBy('id', 'desc')
    .limit(LIST_PAGE + 1);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('enrolled_at', 'id'), '<', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, (row) => [row.enrolled_at, row.id]);
  return { devices: rows.map(toDevice), ...next };
}

/** Writes a tablet's row as it is, which takes the write lock at the beginning of a transaction. */
export async function lockDevice(trx: Trx, id: string): Promise<void> {
  await trx
    .updateTable('device')
    .set((eb) => ({ name: eb.ref('name') }))
    .where('id', '=', id)
    .execute();
}

/** One tablet by its id, whoever asks; undefined if the workshop never had it. */
export async function findDevice(db: Db, id: string): Promise<Device | undefined> {
  const row = await db.selectFrom('device').selectAll().where('id', '=', id).executeTakeFirst();
  return row === undefined ? undefined : toDevice(row);
}

/** Notes that a tablet was heard from; call it inside the transaction that the tablet caused. */
export async function noteHeardFrom(trx: Trx, deviceId: string, clock: Clock): Promise<void> {
  await trx
    .updateTable('device')
    .set({ last_heard_at: stamp(clock) })
    .where('id', '=', deviceId)
    .execute();
}

/** A tablet as the modules pass it on. */
export function toDevice(row: DeviceRow): Device {
  return {
    id: row.id,
    name: row.name,
    state: row.state,
    enrolledBy: row.enrolled_by,
    enrolledAt: row.enrolled_at,
    lastHeardAt: row.last_heard_at,
  };
}
